import type { Vec3 } from '$lib/magnetics/vector';
import { endPose, motion, type Motion, type Standing } from './motion';
import { drawParking, parkingPath, poseAt, type Path } from './path';
import type { Random } from './random';
import type { BayPlan, Lane } from './site-plan';
import { mostMg, scaleVehicle, vehicleOfSize, type Vehicle } from './vehicle';

/** One vehicle's stay in one bay: driving in, standing, driving out. */
export interface Visit {
	bayIndex: number;
	vehicle: Vehicle;
	path: Path;
	/** Drives in from `inFromMs`, stands from `fromMs` to `toMs`, is gone at `outToMs`. */
	inFromMs: number;
	fromMs: number;
	toMs: number;
	outToMs: number;
	/** Off the bay's centre line, metres. */
	leftM: number;
	/** It came because the neighbour's did. */
	pinned: boolean;
}

/** Times drawn log-uniformly from one of several spans, by share. */
export type Spans = readonly { share: number; lowS: number; highS: number }[];

export interface VehicleMix {
	/** Field that the standing vehicle makes at its own node, mG: log-normal inside [low, high]. */
	medianMg: number;
	sigma: number;
	lowMg: number;
	highMg: number;
	/** Share of high-chassis vehicles, whose field reaches the neighbours. */
	vanShare: number;
	askewM: number;
	/** No vehicle makes more than this at a neighbour's node, mG. */
	mostEchoMg: number;
	/** None makes more than this at its own node while it drives in, mG; absent = axles may pass close over it. */
	mostPassMg?: number;
}

export interface Life {
	vehicles: VehicleMix;
	stays: Spans;
	gaps: Spans;
	/** How many times longer gaps are at an hour of the local day (0..23); absent = no rhythm. */
	gapByHour?: readonly number[];
	localOffsetMs?: number;
}

/** Between one vehicle's leaving and the next one's standing there lies both drives' time. */
const LEAST_GAP_S = 25;
/** A bay stays empty this much longer when a vehicle is wanted at a time. */
const PIN_WAIT_MS = 2 * 3_600_000;
/** Fine enough to see an axle go over the node. */
const PASS_STEP_S = 0.1;

export function drawSpanS(rng: Random, spans: Spans): number {
	let left = rng.uniform() * spans.reduce((sum, span) => sum + span.share, 0);
	for (const span of spans) {
		left -= span.share;
		if (left <= 0) return span.lowS * Math.pow(span.highS / span.lowS, rng.uniform());
	}
	return spans[spans.length - 1]!.highS;
}

/** What one bay needs to know to invent its next visit. */
export interface BayLife {
	bayIndex: number;
	bay: BayPlan;
	lane: Lane;
	nodeNedM: Vec3;
	/** Nodes of the bays beside it. */
	besideNedM: readonly Vec3[];
	earthUnit: Vec3;
	life: Life;
	rng: Random;
	/** The bay is empty from here on. */
	freeFromMs: number;
	/** Times at which a vehicle is wanted here (beside a neighbour's). */
	pins: number[];
}

/** Largest field at the bay's own node on the way in, mG. */
function passMg(vehicle: Vehicle, path: Path, nodeNedM: Vec3): number {
	const pose = endPose(path);
	let most = 0;
	for (let atS = 0; atS <= path.durationS; atS += PASS_STEP_S) {
		poseAt(path, atS, pose);
		most = Math.max(most, mostMg(vehicle, pose, [nodeNedM]));
	}
	return most;
}

function drawGuest(bay: BayLife, path: Path): Vehicle {
	const { rng } = bay;
	const pose = endPose(path);
	const mix = bay.life.vehicles;
	let drawn: Vehicle | null = null;
	for (let tries = 0; tries < 12; tries++) {
		const sizeMg = rng.logNormal(mix.medianMg, mix.sigma, mix.lowMg, mix.highMg);
		const build = rng.chance(mix.vanShare) ? 'van' : 'car';
		drawn = vehicleOfSize(rng, build, bay.earthUnit, sizeMg, pose, bay.nodeNedM);
		const { mostPassMg } = mix;
		if (mostPassMg !== undefined && passMg(drawn, path, bay.nodeNedM) > mostPassMg) continue;
		if (mostMg(drawn, pose, bay.besideNedM) <= mix.mostEchoMg) return drawn;
	}
	// Only where the bay's own node lies in a dead zone of every draw.
	const echoMg = mostMg(drawn!, pose, bay.besideNedM);
	return scaleVehicle(drawn!, Math.min(1, mix.mostEchoMg / echoMg));
}

function drawVisit(bay: BayLife, fromMs: number, stayS: number): Visit {
	const { rng, life } = bay;
	const mix = life.vehicles;
	const parking = drawParking(rng, mix.askewM);
	const path = parkingPath(bay.bay, bay.lane, parking);
	const vehicle = drawGuest(bay, path);
	const driveMs = Math.ceil(path.durationS * 1000);
	const toMs = Math.round(fromMs + stayS * 1000);
	return {
		bayIndex: bay.bayIndex,
		vehicle,
		path,
		inFromMs: fromMs - driveMs,
		fromMs,
		toMs,
		outToMs: toMs + driveMs,
		leftM: parking.leftM,
		pinned: false
	};
}

/** The bay's next visit after `freeFromMs`; moves that on. */
export function nextVisit(bay: BayLife): Visit {
	const { rng, life } = bay;
	let gapS = drawSpanS(rng, life.gaps);
	const localMs = bay.freeFromMs + (life.localOffsetMs ?? 0);
	const hour = Math.floor((localMs % 86_400_000) / 3_600_000);
	gapS = Math.max(LEAST_GAP_S, gapS * (life.gapByHour?.[hour] ?? 1));
	const drawnMs = Math.round(bay.freeFromMs + gapS * 1000);
	const pin = bay.pins.find((atMs) => atMs > bay.freeFromMs + LEAST_GAP_S * 1000);
	const pinned = pin !== undefined && pin < drawnMs + PIN_WAIT_MS;
	const visit = drawVisit(bay, pinned ? pin : drawnMs, drawSpanS(rng, life.stays));
	bay.freeFromMs = visit.toMs;
	return { ...visit, pinned };
}

export function motionsOf(visit: Visit): { moves: Motion[]; standing: Standing } {
	const { vehicle, path, fromMs, toMs } = visit;
	return {
		moves: [
			{ ...motion(vehicle, path, visit.inFromMs, 'forth'), toMs: fromMs },
			motion(vehicle, path, toMs, 'back')
		],
		standing: { vehicle, pose: endPose(path), fromMs, toMs }
	};
}
