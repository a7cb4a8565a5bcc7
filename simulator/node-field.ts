import type { Vec3 } from '$lib/magnetics/vector';
import { variationAt, type GeomagneticSeries } from './geomagnetic';
import { motionFieldMg, nearestM, newPose, type Motion, type Standing } from './motion';
import type { NodePlan } from './site-plan';
import { vehicleFieldMg } from './vehicle';

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
	motions: Motion[];
	motionNext: number;
	active: Motion[];
}

/** Beyond these a vehicle moves a node by less than noise; they bound the work per vehicle. */
const STANDING_REACH_M = 14;
const MOVING_REACH_M = 8;
const LEAST_LEVEL_MG = 0.02;
/** The node lies this far under the surface. */
const DEPTH_M = 0.03;
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
		active: []
	};
}

/** Keeps a list sorted by time though a few things are added out of order. */
function insertByTime<T>(list: T[], item: T, timeOf: (item: T) => number): void {
	let i = list.length;
	const time = timeOf(item);
	while (i > 0 && timeOf(list[i - 1]!) > time) i--;
	list.splice(i, 0, item);
}

/** False when the vehicle never comes near enough to be noticed. */
export function addMotion(field: NodeField, move: Motion): boolean {
	const [north, east] = field.positionNedM;
	if (nearestM(move.path, east, north) > MOVING_REACH_M) return false;
	insertByTime(field.motions, move, (m) => m.fromMs);
	return true;
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

/** When a vehicle next begins to move near the node; Infinity when none is known. */
export const nextMotionMs = (field: NodeField): number =>
	field.motions[field.motionNext]?.fromMs ?? Infinity;

function advance(field: NodeField, atMs: number): void {
	for (;;) {
		const level = field.levels[field.levelNext];
		if (level === undefined || level.atMs > atMs) break;
		field.levelNext++;
		for (let axis = 0; axis < 3; axis++) field.levelSum[axis]! += level.deltaMg[axis]!;
	}
	for (;;) {
		const move = field.motions[field.motionNext];
		if (move === undefined || move.fromMs > atMs) break;
		field.motionNext++;
		field.active.push(move);
	}
	if (field.active.some((move) => move.toMs <= atMs)) {
		field.active = field.active.filter((move) => move.toMs > atMs);
	}
	// What lies behind is let go, so that a live simulator does not grow.
	if (field.motionNext > 2000) {
		field.motions.splice(0, field.motionNext);
		field.motionNext = 0;
	}
	if (field.levelNext > 2000) {
		field.levels.splice(0, field.levelNext);
		field.levelNext = 0;
	}
}

const scratch = newPose();

/** True field in the node's axes, mG. Moves the node's place in time: never ask for an earlier time. */
export function fieldMg(field: NodeField, atMs: number): Vec3 {
	advance(field, atMs);
	const varied = variationAt(field.variation, atMs);
	let north = field.quietMg[0] + varied[0] + field.levelSum[0];
	let east = field.quietMg[1] + varied[1] + field.levelSum[1];
	let down = field.quietMg[2] + varied[2] + field.levelSum[2];
	for (const move of field.active) {
		const moving = motionFieldMg(move, atMs, field.positionNedM, scratch);
		north += moving[0];
		east += moving[1];
		down += moving[2];
	}
	const [x, y, z] = field.rotation;
	return [
		x[0] * north + x[1] * east + x[2] * down + field.surroundingsMg[0],
		y[0] * north + y[1] * east + y[2] * down + field.surroundingsMg[1],
		z[0] * north + z[1] * east + z[2] * down + field.surroundingsMg[2]
	];
}
