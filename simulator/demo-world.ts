import { signedRange } from '$lib/magnetics/counts';
import { builtInProfile } from '$lib/magnetics/sensor-profile';
import type { Vec3 } from '$lib/magnetics/vector';
import { demoPlan, isSpared, LIVES, LOCAL_OFFSET_MS, troubleOf } from './demo-site';
import type { NodeEvent } from './film';
import { addStorm, recordedSeries } from './geomagnetic';
import type { NodeConfig } from './node-state';
import { random } from './random';
import { nextVisit, type BayLife } from './schedule';
import { nodeCourse, type Weather } from './temperature';
import { drawPass } from './traffic';
import type { Stay } from './truth';
import { addTraffic, addVisit, laneNodesNedM, makeWorld, type World } from './world';

const MINUTE_MS = 60_000;
const HOUR_MS = 60 * MINUTE_MS;
const DAY_MS = 24 * HOUR_MS;
/** The week before the first start is history. */
export const HISTORY_MS = 7 * DAY_MS;
/** Geomagnetic variation is kept ready for so long after a start. */
const AHEAD_DAYS = 120;
const BESIDE_M = 8;
const PASSES_PER_DAY = 60;

/** The demo's world: wholly determined by seed and time of birth, extended as time goes on. */
export interface DemoWorld {
	world: World;
	bornMs: number;
	seed: number;
	bays: BayLife[];
	/** Traffic is drawn up to here. */
	trafficToMs: number;
}

export function makeDemoWorld(seed: number, bornMs: number, nowMs: number): DemoWorld {
	const plan = demoPlan(seed);
	const startMs = bornMs - HISTORY_MS;
	const minutes = Math.ceil((nowMs - startMs) / MINUTE_MS) + AHEAD_DAYS * 1440;
	const variation = recordedSeries(startMs, minutes);
	const storm = {
		fromMs: bornMs - 3.4 * DAY_MS,
		durationMs: 9 * HOUR_MS,
		peakMg: 6,
		stepMg: 2,
		steps: 4
	};
	addStorm(variation, storm, random(seed, 'storm'));
	const world = makeWorld(plan, variation, bornMs, seed);
	const bays = plan.bays.map((bay, bayIndex): BayLife => {
		const nodeNedM = world.fields[world.nodeOfBay[bayIndex]!]!.positionNedM;
		const besideNedM = world.fields
			.map((field) => field.positionNedM)
			.filter(
				(at) => at !== nodeNedM && Math.hypot(at[0] - nodeNedM[0], at[1] - nodeNedM[1]) < BESIDE_M
			);
		return {
			bayIndex,
			bay,
			lane: plan.lanes.find((lane) => lane.row === bay.row)!,
			nodeNedM,
			besideNedM,
			earthUnit: world.earthUnit,
			life: LIVES[bay.zone]!,
			rng: random(seed, 'bay', bayIndex),
			// Empty while the references are learned.
			freeFromMs: startMs + 15 * MINUTE_MS,
			pins: []
		};
	});
	return { world, bornMs, seed, bays, trafficToMs: startMs };
}

/** Invents vehicles up to a time; the stays it added. */
export function extendTo(demo: DemoWorld, toMs: number): Stay[] {
	const stays: Stay[] = [];
	for (const bay of demo.bays) {
		while (bay.freeFromMs < toMs) {
			const visit = nextVisit(bay);
			if (!isSpared(bay.bay.code, visit, demo.bornMs)) {
				stays.push(addVisit(demo.world, visit).stay);
			}
		}
	}
	while (demo.trafficToMs < toMs) {
		addDayOfTraffic(demo, demo.trafficToMs);
		demo.trafficToMs += DAY_MS;
	}
	return stays;
}

/** Vehicles that only drive past, by day. */
function addDayOfTraffic(demo: DemoWorld, fromMs: number): void {
	const { world, seed } = demo;
	const mix = { perHour: 0, lowMg: 1.5, highMg: 9, speedMPerS: [3, 8] as const };
	for (const lane of world.plan.lanes) {
		const rng = random(seed, 'traffic', lane.row, fromMs);
		const nodes = laneNodesNedM(world, lane);
		for (let k = 0; k < PASSES_PER_DAY; k++) {
			const atMs = Math.round(fromMs + rng.uniform() * DAY_MS);
			const hour = ((atMs + LOCAL_OFFSET_MS) % DAY_MS) / HOUR_MS;
			if (hour < 6.5 || hour > 22) continue;
			addTraffic(world, [drawPass(rng, lane, nodes, mix, world.earthUnit, atMs)], []);
		}
	}
}

function demoWeather(seed: number, bornMs: number): Weather {
	// Coldest about 20 January, warmest half a year later.
	const season = Math.cos((2 * Math.PI * (bornMs - Date.UTC(2026, 0, 20))) / (365.25 * DAY_MS));
	return {
		meanC: 12 - 8 * season,
		halfSwingC: 6 - 2 * season,
		spellC: 2,
		cloudC: 1,
		lowestC: -18,
		highestC: 55,
		localOffsetMs: LOCAL_OFFSET_MS,
		seed
	};
}

/** Pairs of the first week: one while learning, one by rule in the third night. */
function historyPairs(startMs: number, index: number): NodeEvent[] {
	const nightMs = startMs + 3 * DAY_MS - ((startMs + LOCAL_OFFSET_MS) % DAY_MS) + 2 * HOUR_MS;
	return [
		{ kind: 'pulse', verb: 'pair', atMs: startMs + MINUTE_MS },
		{ kind: 'pulse', verb: 'pair', atMs: nightMs + index * 3 * MINUTE_MS }
	];
}

export function demoNodeConfig(demo: DemoWorld, index: number): NodeConfig {
	const { world, seed, bornMs } = demo;
	const node = world.plan.nodes[index]!;
	const profile = builtInProfile(node.profileCode)!;
	const rng = random(seed, 'config', index);
	const axes = (draw: () => number): Vec3 => [draw(), draw(), draw()];
	const trouble = troubleOf(world.plan.bays[node.bayIndex]!.code, bornMs);
	return {
		index,
		serial: node.serial,
		profileCode: node.profileCode,
		sensor: {
			countsPerGauss: profile.countsPerGauss,
			limit: -signedRange(profile).min,
			noiseMg: rng.between(0.4, 0.9),
			offsetMg: axes(() => rng.between(-200, 200)),
			offsetPerC: axes(() => rng.between(-0.3, 0.3)),
			kappaPerC: profile.sensitivityTempcoPerC,
			referenceC: 25
		},
		course: nodeCourse(demoWeather(seed, bornMs), index),
		events: [...trouble.events, ...historyPairs(bornMs - HISTORY_MS, index)].sort(
			(a, b) => a.atMs - b.atMs
		),
		burstHz: 2,
		habit: { periodS: 2, deltaMg: 8 },
		batching: { rows: 4, holdMs: 900 },
		clockOffsetMs: 0,
		battery: { fullMv: Math.round(rng.between(3560, 3650)), endsFromMs: trouble.cellEndsFromMs },
		firmware: '1.4.0',
		keys: 'full',
		seed
	};
}
