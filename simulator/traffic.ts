import type { Vec3 } from '$lib/magnetics/vector';
import { endPose, motion, type Motion, type Standing } from './motion';
import { lanePath } from './path';
import type { Random } from './random';
import { unitEastNorth, type Lane } from './site-plan';
import { drawVehicle, mostMg, scaleVehicle, type Vehicle } from './vehicle';

export interface TrafficMix {
	perHour: number;
	/** Its largest field at any node of the row, mG, log-uniform. */
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

const BEYOND_M = 18;
const QUEUE_GAP_M = 6.8;
const OFF_M = 0.6;
const LOOK_STEP_M = 0.8;

const logBetween = (rng: Random, low: number, high: number): number =>
	low * Math.pow(high / low, rng.uniform());

/** A vehicle whose largest field at any node of the row, anywhere along the lane, has the wanted size. */
function laneVehicle(
	rng: Random,
	lane: Lane,
	offM: number,
	nodesNedM: readonly Vec3[],
	sizeMg: number,
	earthUnit: Vec3
): Vehicle {
	const [noseE, noseN] = unitEastNorth(lane.alongDeg);
	const vehicle = drawVehicle(rng, rng.chance(0.4) ? 'van' : 'car', earthUnit);
	let peakMg = 0;
	for (let alongM = -2; alongM <= lane.lengthM + 2; alongM += LOOK_STEP_M) {
		const eastM = lane.eastM + noseE * alongM - noseN * offM;
		const northM = lane.northM + noseN * alongM + noseE * offM;
		peakMg = Math.max(peakMg, mostMg(vehicle, { eastM, northM, noseE, noseN }, nodesNedM));
	}
	return scaleVehicle(vehicle, sizeMg / peakMg);
}

/** One vehicle driving past a whole row. */
export function drawPass(
	rng: Random,
	lane: Lane,
	nodesNedM: readonly Vec3[],
	mix: TrafficMix,
	earthUnit: Vec3,
	fromMs: number
): Motion {
	const offM = rng.between(-OFF_M, OFF_M);
	const sizeMg = logBetween(rng, mix.lowMg, mix.highMg);
	const vehicle = laneVehicle(rng, lane, offM, nodesNedM, sizeMg, earthUnit);
	const speed = logBetween(rng, ...mix.speedMPerS);
	const path = lanePath(lane, offM, -BEYOND_M, lane.lengthM + BEYOND_M, speed);
	return motion(vehicle, path, fromMs, 'forth');
}

/** Several vehicles that halt in the lane beside the row for minutes, move up, and leave. */
export function drawQueue(
	rng: Random,
	lane: Lane,
	nodesNedM: readonly Vec3[],
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
		const vehicle = laneVehicle(rng, lane, offM, nodesNedM, sizeMg, earthUnit);
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
