import type { Vec3 } from '$lib/magnetics/vector';
import { endPose, motion, newPose, type Motion, type Standing } from './motion';
import { lanePath } from './path';
import type { Random } from './random';
import { unitEastNorth, type Lane } from './site-plan';
import { vehicleOfSize, type Vehicle } from './vehicle';

export interface TrafficMix {
	perHour: number;
	/** Field of a passing vehicle abreast of a node, mG, log-uniform. */
	lowMg: number;
	highMg: number;
	speedMPerS: readonly [number, number];
}

export interface QueueMix {
	perDay: number;
	lowMg: number;
	highMg: number;
	/** How long the queue stands at each halt, s, log-uniform. */
	haltS: readonly [number, number];
}

/** A node of the row and where along the lane it lies: the vehicle's size is set abreast of it. */
export interface LaneNode {
	nedM: Vec3;
	alongM: number;
}

const BEYOND_M = 18;
const QUEUE_GAP_M = 6.8;
const OFF_M = 0.6;

const logBetween = (rng: Random, low: number, high: number): number =>
	low * Math.pow(high / low, rng.uniform());

/** A vehicle of the wanted size at a node when it is abreast of it. */
function laneVehicle(
	rng: Random,
	lane: Lane,
	offM: number,
	node: LaneNode,
	sizeMg: number,
	earthUnit: Vec3
): Vehicle {
	const [noseE, noseN] = unitEastNorth(lane.alongDeg);
	const pose = {
		...newPose(),
		noseE,
		noseN,
		eastM: lane.eastM + noseE * node.alongM - noseN * offM,
		northM: lane.northM + noseN * node.alongM + noseE * offM
	};
	const build = rng.chance(0.4) ? 'van' : 'car';
	return vehicleOfSize(rng, build, earthUnit, sizeMg, pose, node.nedM);
}

/** One vehicle driving past a whole row. */
export function drawPass(
	rng: Random,
	lane: Lane,
	nodes: readonly LaneNode[],
	mix: TrafficMix,
	earthUnit: Vec3,
	fromMs: number
): Motion {
	const offM = rng.between(-OFF_M, OFF_M);
	const sizeMg = logBetween(rng, mix.lowMg, mix.highMg);
	const vehicle = laneVehicle(rng, lane, offM, rng.pick(nodes), sizeMg, earthUnit);
	const speed = logBetween(rng, ...mix.speedMPerS);
	const path = lanePath(lane, offM, -BEYOND_M, lane.lengthM + BEYOND_M, speed);
	return motion(vehicle, path, fromMs, 'forth');
}

/** Several vehicles that halt in the lane beside the row for minutes, move up, and leave. */
export function drawQueue(
	rng: Random,
	lane: Lane,
	nodes: readonly LaneNode[],
	mix: QueueMix,
	earthUnit: Vec3,
	fromMs: number
): { moves: Motion[]; standings: Standing[] } {
	const moves: Motion[] = [];
	const standings: Standing[] = [];
	const vehicles = rng.whole(2, 5);
	const halts = Array.from({ length: rng.whole(1, 3) }, () => logBetween(rng, ...mix.haltS));
	let frontM = rng.between(0.4, 1) * lane.lengthM;
	for (let k = 0; k < vehicles; k++) {
		const offM = rng.between(-OFF_M / 2, OFF_M / 2);
		const sizeMg = logBetween(rng, mix.lowMg, mix.highMg);
		const vehicle = laneVehicle(rng, lane, offM, rng.pick(nodes), sizeMg, earthUnit);
		let at = -BEYOND_M;
		let timeMs = fromMs + k * rng.between(2500, 4500);
		let stopM = frontM;
		for (const haltS of halts) {
			if (stopM <= at + 1) continue;
			const path = lanePath(lane, offM, at, stopM, rng.between(1.5, 3.5));
			const move = motion(vehicle, path, timeMs, 'forth');
			const untilMs = move.toMs + (haltS + rng.between(0, 4)) * 1000;
			moves.push(move);
			standings.push({ vehicle, pose: endPose(path), fromMs: move.toMs, toMs: untilMs });
			[at, timeMs, stopM] = [stopM, untilMs, stopM + QUEUE_GAP_M];
		}
		const away = lanePath(lane, offM, at, lane.lengthM + BEYOND_M + QUEUE_GAP_M, 3);
		moves.push(motion(vehicle, away, timeMs, 'forth'));
		frontM -= QUEUE_GAP_M;
	}
	return { moves, standings };
}
