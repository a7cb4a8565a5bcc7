import type { Vec3 } from '$lib/magnetics/vector';
import { addVariation, type GeomagneticSeries } from './geomagnetic';
import {
	addMotionFieldMg,
	nearestM,
	newPose,
	passHeightMg,
	type Motion,
	type Standing
} from './motion';
import type { NodePlan } from './site-plan';
import { vehicleFieldMg, type Sum3 } from './vehicle';

/** A lasting change of field at the node, [north, east, down] mG. */
interface Level {
	atMs: number;
	deltaMg: Vec3;
}

/** How the housing lies: x axis east of north, and its lean, degrees. */
export interface Housing {
	headingDeg: number;
	rollDeg: number;
	pitchDeg: number;
}

/**
 * The true field at one node over time: the Earth's, bent by steel in the ground, its variation, and
 * every vehicle near enough to matter. Asked forwards in time only.
 */
export interface NodeField {
	positionNedM: Vec3;
	pose: Housing;
	/** Rows turn [north, east, down] into the node's axes. */
	rotation: [Vec3, Vec3, Vec3];
	/** Quiet field without variation, [north, east, down] mG. */
	quietMg: Vec3;
	/** Added in the node's axes: steel laid later. */
	surroundingsMg: [number, number, number];
	variation: GeomagneticSeries;
	levels: Level[];
	levelNext: number;
	levelSum: [number, number, number];
	motions: Near[];
	motionNext: number;
	active: Near[];
	/** How many of the active ones a node's own delta could notice. */
	waking: number;
	/** The last field asked for, node's axes, mG. */
	now: Sum3;
	/** The same as [north, east, down]; working space. */
	world: Sum3;
}

/** A vehicle moving near the node, and whether it moves the field enough to wake it. */
interface Near {
	move: Motion;
	wakes: boolean;
}

/** Beyond these a vehicle moves a node by less than noise; they bound the work per vehicle. */
const STANDING_REACH_M = 14;
const MOVING_REACH_M = 8;
const LEAST_LEVEL_MG = 0.02;
/** Half the smallest delta of a reporting habit: less cannot start a burst. */
const WAKE_MG = 4;
/** The node lies this far under the surface. */
const DEPTH_M = 0.03;
const KEPT = 2000;
const RADIANS = Math.PI / 180;

/** Turn about the vertical to the node's heading, then pitch and roll of the housing. */
export function rotationOf({ headingDeg, rollDeg, pitchDeg }: Housing): [Vec3, Vec3, Vec3] {
	const [sh, ch] = [Math.sin(headingDeg * RADIANS), Math.cos(headingDeg * RADIANS)];
	const [sp, cp] = [Math.sin(pitchDeg * RADIANS), Math.cos(pitchDeg * RADIANS)];
	const [sr, cr] = [Math.sin(rollDeg * RADIANS), Math.cos(rollDeg * RADIANS)];
	return [
		[cp * ch, cp * sh, -sp],
		[sr * sp * ch - cr * sh, sr * sp * sh + cr * ch, sr * cp],
		[cr * sp * ch + sr * sh, cr * sp * sh - sr * ch, cr * cp]
	];
}

export function nodeField(node: NodePlan, quietMg: Vec3, variation: GeomagneticSeries): NodeField {
	const { headingDeg, rollDeg, pitchDeg } = node;
	const pose = { headingDeg, rollDeg, pitchDeg };
	return {
		pose,
		positionNedM: [node.northM, node.eastM, DEPTH_M],
		rotation: rotationOf(pose),
		quietMg,
		surroundingsMg: [0, 0, 0],
		variation,
		levels: [],
		levelNext: 0,
		levelSum: [0, 0, 0],
		motions: [],
		motionNext: 0,
		active: [],
		waking: 0,
		now: [0, 0, 0],
		world: [0, 0, 0]
	};
}

/** Keeps a list sorted by time though a few things are added out of order. */
function insertByTime<T>(list: T[], item: T, timeOf: (item: T) => number): void {
	let i = list.length;
	const time = timeOf(item);
	while (i > 0 && timeOf(list[i - 1]!) > time) i--;
	list.splice(i, 0, item);
}

/** The vehicle's largest field at the node, mG; 0 when it never comes near. */
export function addMotion(field: NodeField, move: Motion): number {
	const [north, east] = field.positionNedM;
	if (nearestM(move.path, east, north) > MOVING_REACH_M) return 0;
	const peakMg = passHeightMg(move, field.positionNedM);
	const wakes = peakMg > WAKE_MG;
	insertByTime(field.motions, { move, wakes }, (near) => near.move.fromMs);
	return peakMg;
}

/** The level that a standing vehicle makes at the node, mG; zero when out of reach. */
export function addStanding(field: NodeField, standing: Standing): number {
	const [north, east] = field.positionNedM;
	const { pose } = standing;
	if (Math.hypot(pose.eastM - east, pose.northM - north) > STANDING_REACH_M) return 0;
	const deltaMg = vehicleFieldMg(standing.vehicle, pose, field.positionNedM);
	const size = Math.hypot(...deltaMg);
	if (size < LEAST_LEVEL_MG) return 0;
	const away: Vec3 = [-deltaMg[0], -deltaMg[1], -deltaMg[2]];
	insertByTime(field.levels, { atMs: standing.fromMs, deltaMg }, (l) => l.atMs);
	insertByTime(field.levels, { atMs: standing.toMs, deltaMg: away }, (l) => l.atMs);
	return size;
}

/** When a vehicle next begins to move noticeably near the node; Infinity when none is known. */
export function nextMotionMs(field: NodeField): number {
	for (let i = field.motionNext; i < field.motions.length; i++) {
		const near = field.motions[i]!;
		if (near.wakes) return near.move.fromMs;
	}
	return Infinity;
}

function advanceLevels(field: NodeField, atMs: number): void {
	for (;;) {
		const level = field.levels[field.levelNext];
		if (level === undefined || level.atMs > atMs) return;
		field.levelNext++;
		field.levelSum[0] += level.deltaMg[0];
		field.levelSum[1] += level.deltaMg[1];
		field.levelSum[2] += level.deltaMg[2];
	}
}

function advanceMotions(field: NodeField, atMs: number): void {
	for (;;) {
		const near = field.motions[field.motionNext];
		if (near === undefined || near.move.fromMs > atMs) break;
		field.motionNext++;
		field.active.push(near);
		if (near.wakes) field.waking++;
	}
	for (let i = field.active.length - 1; i >= 0; i--) {
		const near = field.active[i]!;
		if (near.move.toMs > atMs) continue;
		field.active.splice(i, 1);
		if (near.wakes) field.waking--;
	}
}

/** What lies behind is let go, so that a live simulator does not grow. */
function forget(field: NodeField): void {
	if (field.motionNext > KEPT) {
		field.motions.splice(0, field.motionNext);
		field.motionNext = 0;
	}
	if (field.levelNext > KEPT) {
		field.levels.splice(0, field.levelNext);
		field.levelNext = 0;
	}
}

const scratch = newPose();

/** Writes the true field in the node's axes into `field.now`, mG. Never ask for an earlier time. */
export function lookAt(field: NodeField, atMs: number): void {
	advanceLevels(field, atMs);
	advanceMotions(field, atMs);
	forget(field);
	const { world, now, rotation, quietMg, levelSum, surroundingsMg } = field;
	world[0] = quietMg[0] + levelSum[0];
	world[1] = quietMg[1] + levelSum[1];
	world[2] = quietMg[2] + levelSum[2];
	addVariation(field.variation, atMs, world);
	for (const { move } of field.active) {
		addMotionFieldMg(move, atMs, field.positionNedM, scratch, world);
	}
	for (let axis = 0; axis < 3; axis++) {
		const row = rotation[axis]!;
		now[axis] = row[0] * world[0] + row[1] * world[1] + row[2] * world[2] + surroundingsMg[axis]!;
	}
}
