import type { BayPlan, Lane } from './site-plan';
import { unitEastNorth } from './site-plan';
import type { Random } from './random';

/** Where a vehicle's centre is and where its nose points (unit vector), metres in the site's plane. */
export interface Pose {
	eastM: number;
	northM: number;
	noseE: number;
	noseN: number;
}

/** One leg of driving along the path: from one arc length to another in a time. */
interface Leg {
	fromM: number;
	toM: number;
	durationS: number;
	/** Speed over the leg: steady, or braking to rest at its end. */
	ease: 'steady' | 'brake';
}

/** A drive: a polyline with arc lengths, and how far along it the vehicle is at each time. */
export interface Path {
	east: number[];
	north: number[];
	arcM: number[];
	legs: Leg[];
	durationS: number;
	/** The vehicle's nose against the direction of travel: 1 forwards, -1 backwards. */
	nose: 1 | -1;
}

type Point = readonly [number, number];

function polyline(points: readonly Point[], legs: (lengthM: number) => Leg[], nose: 1 | -1): Path {
	const arcM: number[] = [];
	let arc = 0;
	points.forEach((point, i) => {
		const before = points[i - 1];
		if (before !== undefined) arc += Math.hypot(point[0] - before[0], point[1] - before[1]);
		arcM.push(arc);
	});
	const all = legs(arc);
	return {
		east: points.map((p) => p[0]),
		north: points.map((p) => p[1]),
		arcM,
		legs: all,
		durationS: all.reduce((sum, leg) => sum + leg.durationS, 0),
		nose
	};
}

function bezier(p0: Point, c0: Point, c1: Point, p1: Point, steps: number): Point[] {
	return Array.from({ length: steps + 1 }, (_, i) => {
		const t = i / steps;
		const u = 1 - t;
		const [a, b, c, d] = [u * u * u, 3 * u * u * t, 3 * u * t * t, t * t * t];
		return [
			a * p0[0] + b * c0[0] + c * c1[0] + d * p1[0],
			a * p0[1] + b * c0[1] + c * c1[1] + d * p1[1]
		];
	});
}

export interface ParkSpec {
	/** Off the bay's centre, metres. */
	forwardM: number;
	leftM: number;
	/** Direction along the lane: with its travel (1) or against it (-1). */
	direction: 1 | -1;
	/** Nose first or tail first. */
	nose: 1 | -1;
	/** Corrections: back out a little and in again, this many times. */
	shunts: number;
	speedMPerS: number;
}

const APPROACH_M = 13;
const TURN_M = 5.5;
const SHUNT_M = 1.8;
const SHUNT_S = 3.5;
const BRAKE_M_PER_S2 = 1.1;

/** From the lane into the bay: straight along the lane, a smooth turn, to rest; departures drive it backwards in time. */
export function parkingPath(bay: BayPlan, lane: Lane, spec: ParkSpec): Path {
	const [noseE, noseN] = unitEastNorth(bay.noseDeg);
	const [laneE0, laneN0] = unitEastNorth(lane.alongDeg);
	const [laneE, laneN] = [laneE0 * spec.direction, laneN0 * spec.direction];
	const stop: Point = [
		bay.eastM + noseE * spec.forwardM - noseN * spec.leftM,
		bay.northM + noseN * spec.forwardM + noseE * spec.leftM
	];
	const along = (stop[0] - lane.eastM) * laneE + (stop[1] - lane.northM) * laneN;
	const onLane = (m: number): Point => [
		lane.eastM + laneE * (along + m),
		lane.northM + laneN * (along + m)
	];
	const start = onLane(-TURN_M);
	const turn = bezier(
		start,
		[start[0] + laneE * 4, start[1] + laneN * 4],
		[stop[0] - noseE * 4.5, stop[1] - noseN * 4.5],
		stop,
		16
	);
	const points = [onLane(-TURN_M - APPROACH_M), onLane(-TURN_M - 4), ...turn];
	return polyline(points, (lengthM) => parkingLegs(lengthM, spec), spec.nose);
}

function parkingLegs(lengthM: number, spec: ParkSpec): Leg[] {
	const v = spec.speedMPerS;
	const brakeM = Math.min(lengthM, (v * v) / (2 * BRAKE_M_PER_S2));
	const legs: Leg[] = [
		{ fromM: 0, toM: lengthM - brakeM, durationS: (lengthM - brakeM) / v, ease: 'steady' },
		{ fromM: lengthM - brakeM, toM: lengthM, durationS: (2 * brakeM) / v, ease: 'brake' }
	];
	for (let i = 0; i < spec.shunts; i++) {
		legs.push({ fromM: lengthM, toM: lengthM - SHUNT_M, durationS: SHUNT_S, ease: 'brake' });
		legs.push({ fromM: lengthM - SHUNT_M, toM: lengthM, durationS: SHUNT_S, ease: 'brake' });
	}
	return legs;
}

/** How people park: most forwards, some askew, a few with corrections. */
export function drawParking(rng: Random, askewM: number): ParkSpec {
	return {
		forwardM: rng.between(-0.35, 0.35),
		leftM: rng.between(-askewM, askewM),
		direction: rng.chance(0.5) ? 1 : -1,
		nose: rng.chance(0.25) ? -1 : 1,
		shunts: rng.chance(0.12) ? rng.whole(1, 2) : 0,
		speedMPerS: rng.between(2.2, 3.8)
	};
}

/** Straight along a lane at a steady speed, `offM` to its left, from one arc length to another. */
export function lanePath(
	lane: Lane,
	offM: number,
	fromM: number,
	toM: number,
	speedMPerS: number
): Path {
	const [laneE, laneN] = unitEastNorth(lane.alongDeg);
	const at = (m: number): Point => [
		lane.eastM + laneE * m - laneN * offM,
		lane.northM + laneN * m + laneE * offM
	];
	return polyline(
		[at(fromM), at(toM)],
		(lengthM) => [{ fromM: 0, toM: lengthM, durationS: lengthM / speedMPerS, ease: 'steady' }],
		1
	);
}

function arcAt(path: Path, timeS: number): number {
	let left = timeS;
	for (const leg of path.legs) {
		if (left < leg.durationS) {
			const share = Math.max(0, left / leg.durationS);
			const eased = leg.ease === 'steady' ? share : share * (2 - share);
			return leg.fromM + (leg.toM - leg.fromM) * eased;
		}
		left -= leg.durationS;
	}
	return path.legs[path.legs.length - 1]!.toM;
}

/** Writes the pose at a time into `pose`: it is asked for thousands of times a second. */
export function poseAt(path: Path, timeS: number, pose: Pose): void {
	const arc = arcAt(path, timeS);
	let i = 1;
	while (i < path.arcM.length - 1 && path.arcM[i]! < arc) i++;
	const before = path.arcM[i - 1]!;
	const spanM = path.arcM[i]! - before;
	const share = spanM > 0 ? (arc - before) / spanM : 0;
	const dE = path.east[i]! - path.east[i - 1]!;
	const dN = path.north[i]! - path.north[i - 1]!;
	pose.eastM = path.east[i - 1]! + dE * share;
	pose.northM = path.north[i - 1]! + dN * share;
	pose.noseE = spanM > 0 ? (dE / spanM) * path.nose : pose.noseE;
	pose.noseN = spanM > 0 ? (dN / spanM) * path.nose : pose.noseN;
}
