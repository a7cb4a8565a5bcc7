import type { Vec3 } from '$lib/magnetics/vector';
import type { Path, Pose } from './path';
import { poseAt } from './path';
import { addVehicleFieldMg, type Sum3, type Vehicle } from './vehicle';

/** A vehicle driving along a path; a departure drives its arrival's path backwards in time. */
export interface Motion {
	vehicle: Vehicle;
	path: Path;
	fromMs: number;
	toMs: number;
	reversed: boolean;
}

/** A vehicle standing still from one time to another: a level that is simply there. */
export interface Standing {
	vehicle: Vehicle;
	pose: Pose;
	fromMs: number;
	toMs: number;
}

const LOOK_MS = 333;
const LOOK_REACH_M2 = 100;

export const newPose = (): Pose => ({ eastM: 0, northM: 0, noseE: 0, noseN: 1 });

export function motion(
	vehicle: Vehicle,
	path: Path,
	fromMs: number,
	direction: 'forth' | 'back'
): Motion {
	const toMs = fromMs + path.durationS * 1000;
	return { vehicle, path, fromMs, toMs, reversed: direction === 'back' };
}

export function motionPose(move: Motion, atMs: number, pose: Pose): void {
	const timeS = (move.reversed ? move.toMs - atMs : atMs - move.fromMs) / 1000;
	poseAt(move.path, timeS, pose);
}

/** Where a path ends, at rest. */
export function endPose(path: Path): Pose {
	const pose = newPose();
	poseAt(path, path.durationS + 1, pose);
	return pose;
}

/** Adds a moving vehicle's field at a point [north, east, down] to `sum`, mG. */
export function addMotionFieldMg(
	move: Motion,
	atMs: number,
	atNedM: Vec3,
	scratch: Pose,
	sum: Sum3
): void {
	motionPose(move, atMs, scratch);
	addVehicleFieldMg(move.vehicle, scratch, atNedM, sum);
}

/** Least distance from a point to the vehicle's centre on a path, metres. */
export function nearestM(path: Path, eastM: number, northM: number): number {
	let nearest = Infinity;
	for (let i = 1; i < path.east.length; i++) {
		const [e0, n0] = [path.east[i - 1]!, path.north[i - 1]!];
		const [dE, dN] = [path.east[i]! - e0, path.north[i]! - n0];
		const length2 = dE * dE + dN * dN;
		const along = length2 > 0 ? ((eastM - e0) * dE + (northM - n0) * dN) / length2 : 0;
		const share = Math.max(0, Math.min(1, along));
		nearest = Math.min(nearest, Math.hypot(eastM - e0 - dE * share, northM - n0 - dN * share));
	}
	return nearest;
}

/** Largest field of a moving vehicle at a point while it drives, mG, looked at every third of a second. */
export function passHeightMg(move: Motion, atNedM: Vec3): number {
	const scratch = newPose();
	let peakMg = 0;
	for (let atMs = move.fromMs; atMs <= move.toMs; atMs += LOOK_MS) {
		motionPose(move, atMs, scratch);
		const [dN, dE] = [scratch.northM - atNedM[0], scratch.eastM - atNedM[1]];
		if (dN * dN + dE * dE > LOOK_REACH_M2) continue;
		const sum: Sum3 = [0, 0, 0];
		addVehicleFieldMg(move.vehicle, scratch, atNedM, sum);
		peakMg = Math.max(peakMg, Math.hypot(...sum));
	}
	return peakMg;
}
