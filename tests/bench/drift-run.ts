/** Runs simulated sites through drift, hour by hour, with pairs by rule: what the drift bench judges. */
import { add, scale, subtract, type Vec3 } from '../../src/lib/magnetics/vector';
import { applyPair, startDrift, type NodeDrift } from '../../src/lib/drift/node-drift';
import { pairDue, type PairRule } from '../../src/lib/drift/pair-rule';
import type { Diagnosis } from '../../src/lib/drift/pairs';
import { driftSettings } from '../../src/lib/drift/params';
import { closeSiteHour } from '../../src/lib/drift/site-hour';
import type { HourParts, HourRecord } from '../../src/lib/drift/types';
import {
	hourLevel,
	injectedMg,
	makeNode,
	occupy,
	readPair,
	sensed,
	tempOf,
	weather,
	type SimNode,
	type Weather
} from './drift-site';

const SETTINGS = driftSettings();
const HOUR_MS = 3_600_000;
const T0 = Date.UTC(2025, 2, 1);

export interface Site {
	sky: Weather;
	sims: SimNode[];
	drifts: NodeDrift[];
	pairAtH: number[];
	/** Pairs that hours since show `field = level - offset`. */
	offsets: Vec3[];
}

function pairAt(site: Site, i: number, h: number): Diagnosis | null {
	const sim = site.sims[i]!;
	const read = readPair(sim, site.sky, h);
	const atMs = T0 + h * HOUR_MS;
	const taken = applyPair(site.drifts[i]!, { atMs, ...read, vacant: sim.stay === null }, SETTINGS);
	site.drifts[i] = taken.drift;
	site.pairAtH[i] = h;
	site.offsets[i] = scale(add(read.setMg, read.resetMg), 0.5);
	return taken.diagnosis;
}

function learn(site: Site, i: number, h: number): void {
	const sim = site.sims[i]!;
	const { setMg, resetMg, tempC } = readPair(sim, site.sky, h);
	const offsetMg = scale(add(setMg, resetMg), 0.5);
	const { field, offset } = sensed(sim, site.sky, h);
	const fieldMg = subtract(add(field, offset), offsetMg);
	site.offsets[i] = offsetMg;
	site.drifts[i] = startDrift({ atMs: T0 + h * HOUR_MS, fieldMg, offsetMg, tempC }, -0.003);
}

export function newSite(nodes: number, hours: number, seed: number): Site {
	const sims = Array.from({ length: nodes }, (_, i) => makeNode(seed * 1000 + i));
	const site: Site = {
		sky: weather(hours, seed),
		sims,
		drifts: [],
		pairAtH: sims.map(() => 0),
		offsets: []
	};
	sims.forEach((_, i) => learn(site, i, 0));
	return site;
}

export interface HourSeen {
	i: number;
	h: number;
	parts: HourParts;
	wasDrifting: boolean;
	diagnosis: Diagnosis | null;
	/** Of the injection, just before the pair. */
	trueMg: Vec3;
}

/** Runs one hour of a site; `seen` hears of every judged hour and of its pair, if any. */
export function runHour(
	site: Site,
	h: number,
	rule: PairRule,
	ar: { rho: number; sigmaMg: number },
	seen: (hour: HourSeen) => void,
	occupancy = 0.5
): void {
	const hours = site.sims.map((sim, i) => {
		occupy(sim, h, occupancy);
		const hour: HourRecord = {
			hourMs: T0 + h * HOUR_MS,
			fieldMg: subtract(hourLevel(sim, site.sky, h, ar), site.offsets[i]!),
			offsetMg: site.offsets[i]!,
			tempC: tempOf(sim, site.sky, h),
			n: 60,
			stay: sim.stay
		};
		return { nodeId: i, drift: site.drifts[i]!, hour };
	});
	for (const { nodeId: i, drift, parts } of closeSiteHour(hours, SETTINGS).closed) {
		const wasDrifting = site.drifts[i]!.watch.driftingSinceMs !== null;
		site.drifts[i] = drift;
		if (parts === null) continue;
		const trueMg = injectedMg(site.sims[i]!, h);
		const chance = {
			nowMs: T0 + h * HOUR_MS,
			lastPairAtMs: T0 + site.pairAtH[i]! * HOUR_MS,
			quiet: true
		};
		const due = pairDue(rule, drift, chance, SETTINGS) !== null;
		const diagnosis = due ? pairAt(site, i, h) : null;
		seen({ i, h, parts, wasDrifting, diagnosis, trueMg });
	}
}
