import { capOf } from '$lib/detection/confidence';
import { advance, encodeFast, encodeSlow, newGroup, view, type Group } from '$lib/detection/group';
import type { ActItem, BayState, HistoryEntry, Outcome } from '$lib/detection/types';
import { builtInProfile, type SensorProfile } from '$lib/magnetics/sensor-profile';
import { chain } from '$lib/server/ingest/chain';
import type { Generated, PlannedAct } from '../../../simulator/generate';
import type { GeomagneticSeries } from '../../../simulator/geomagnetic';
import { inEventOrder } from '../../../simulator/items';
import { pulseItem, rowItem } from './group-items';
import { inServerOrder } from './server-times';

/** What a reader was told of a bay at a random instant. */
export interface Look {
	bayIndex: number;
	atMs: number;
	state: BayState;
	confidence: number | null;
	doubt: string | null;
	/** Its confidence is an 'at most' (provisional reference, carried over a pulse under a vehicle). */
	capped: boolean;
}

export interface Detected {
	/** Effective history: what was entered and not voided. */
	entries: (HistoryEntry & { bayIndex: number })[];
	voided: number;
	looks: Look[];
	rows: number;
	detectMs: number;
	/** Largest stored state of any node at any look, bytes; the store takes 300 and 4096. */
	fastBytes: number;
	slowBytes: number;
	/** Why pulses were not believed, counted. */
	pulsesRefused: Map<string, number>;
}

const LOOK_EVERY_MS = 20 * 60_000;
const SLOT_SHARE = 0.9;
const GRACE_S = 900;

export interface DetectOptions {
	params?: Readonly<Record<string, number>>;
	/** The site's true variation, told hour by hour as a closed hour would be: what an occupied baseline could follow. */
	siteLine?: GeomagneticSeries | undefined;
}
const HOUR_MS = 3_600_000;
/** A closed hour is known so long after its end (server/drift/job.ts). */
const CLOSED_AFTER_MS = 900_000;

/** Runs a generated site through detection, group by group, in event time as the server sees it. */
export function detect(generated: Generated, options: DetectOptions = {}): Detected {
	const detected: Detected = {
		entries: [],
		voided: 0,
		looks: [],
		rows: 0,
		detectMs: 0,
		fastBytes: 0,
		slowBytes: 0,
		pulsesRefused: new Map()
	};
	const placed = generated.plan.nodes.map(({ eastM, northM }, id) => ({
		id,
		siteId: 1,
		eastM,
		northM
	}));
	const inOrder = inServerOrder(generated);
	for (const nodes of chain(placed).groups) {
		detectGroup(inOrder, nodes, options, detected);
	}
	detected.entries.sort((a, b) => a.atMs - b.atMs);
	return detected;
}

function members(generated: Generated, nodes: readonly number[], options: DetectOptions) {
	return nodes.map((nodeId) => {
		const node = generated.plan.nodes[nodeId]!;
		const profile = builtInProfile(node.profileCode)!;
		return {
			nodeId,
			eastM: node.eastM,
			northM: node.northM,
			row: generated.plan.bays[node.bayIndex]!.row,
			profile,
			periodS: generated.scenario.periodS,
			graceS: GRACE_S,
			params: options.params ?? {}
		};
	});
}

function take(detected: Detected, live: Map<string, HistoryEntry>, outcomes: Outcome[]): void {
	for (const outcome of outcomes) {
		if (outcome.kind === 'enter') {
			const { entry } = outcome;
			live.set(`${entry.nodeId} ${entry.type} ${entry.atMs}`, entry);
		} else if (outcome.kind === 'void') {
			live.delete(`${outcome.nodeId} ${outcome.type} ${outcome.atMs}`);
			detected.voided++;
		} else if (outcome.kind === 'pulse_judged' && outcome.why !== null) {
			detected.pulsesRefused.set(outcome.why, (detected.pulsesRefused.get(outcome.why) ?? 0) + 1);
		}
	}
}

function act(planned: PlannedAct, actId: number): ActItem {
	return {
		kind: 'act',
		actId,
		nodeId: planned.nodeIndex,
		atMs: planned.atMs,
		act:
			planned.kind === 'place'
				? { kind: 'place', preCommissioned: planned.byRule }
				: { kind: 'accept', seenEmpty: true, by: 'bench' }
	};
}

function detectGroup(
	{ ordered: generated, times }: ReturnType<typeof inServerOrder>,
	nodes: readonly number[],
	options: DetectOptions,
	detected: Detected
): void {
	const group = newGroup(members(generated, nodes, options));
	const live = new Map<string, HistoryEntry>();
	const acts = generated.acts
		.filter((planned) => nodes.includes(planned.nodeIndex))
		.sort((a, b) => a.atMs - b.atMs);
	const profiles = generated.plan.nodes.map((node) => builtInProfile(node.profileCode)!);
	const line = options.siteLine === undefined ? null : hourlyLine(options.siteLine);
	let nextHour = 0;
	let nextAct = 0;
	let nextLookMs = generated.truth.judgedFromMs + LOOK_EVERY_MS;
	const startedAt = performance.now();
	for (const item of inEventOrder(
		generated,
		nodes,
		(nodeIndex) => (message) => times[nodeIndex]![message]!
	)) {
		while (nextAct < acts.length && acts[nextAct]!.atMs <= item.atMs) {
			take(detected, live, advance(group, act(acts[nextAct]!, nextAct + 1)));
			nextAct++;
		}
		for (; line !== null && (line[nextHour]?.atMs ?? Infinity) <= item.atMs; nextHour++) {
			const { atMs, gMg } = line[nextHour]!;
			for (const nodeId of nodes)
				take(detected, live, advance(group, { kind: 'site_line', nodeId, atMs, gMg }));
		}
		if (item.atMs >= nextLookMs) {
			look(generated, group, nodes, nextLookMs, detected);
			nextLookMs += LOOK_EVERY_MS * (1 - SLOT_SHARE / 2 + SLOT_SHARE * spread(nextLookMs));
		}
		const ready = readyItem(item, profiles);
		if (ready === null) continue;
		if (ready.kind === 'row') detected.rows++;
		take(detected, live, advance(group, ready));
	}
	detected.detectMs += performance.now() - startedAt;
	for (const entry of live.values()) {
		const { bayIndex } = generated.plan.nodes[entry.nodeId]!;
		detected.entries.push({ ...entry, bayIndex });
	}
}

/** Hourly means of the variation (h, e, z), mG, each at the time at which it would be known. */
function hourlyLine({ startMs, north, east, down }: GeomagneticSeries) {
	const line: { atMs: number; gMg: [number, number, number] }[] = [];
	const first = Math.ceil(startMs / HOUR_MS) * HOUR_MS;
	for (let hourMs = first; ; hourMs += HOUR_MS) {
		const from = Math.round((hourMs - startMs) / 60_000);
		if (from + 60 > north.length) return line;
		const mean = (of: Float64Array) => of.subarray(from, from + 60).reduce((s, v) => s + v, 0) / 60;
		line.push({
			atMs: hourMs + HOUR_MS + CLOSED_AFTER_MS,
			gMg: [mean(north), mean(east), mean(down)]
		});
	}
}

type Item = ReturnType<typeof inEventOrder> extends Generator<infer T> ? T : never;

function readyItem(item: Item, profiles: readonly SensorProfile[]) {
	const profile = profiles[item.nodeIndex]!;
	return item.kind === 'row' ? rowItem(item, profile) : pulseItem(item, profile);
}

/** Looks stand at instants that have nothing to do with the site's life: a share of the slot from the golden ratio. */
const spread = (atMs: number): number => ((atMs / LOOK_EVERY_MS) * 0.618033988749895) % 1;

function look(
	generated: Generated,
	group: Group,
	nodes: readonly number[],
	atMs: number,
	detected: Detected
): void {
	for (const nodeId of nodes) {
		const { bayIndex } = generated.plan.nodes[nodeId]!;
		const said = view(group, nodeId);
		// Judged on arrival by the server, never by the detector (method, 'History and feed').
		const lost = atMs - group.byId.get(nodeId)!.fast.lastAtMs > GRACE_S * 1000;
		const state = lost ? 'unknown' : said.state;
		const { confidence, doubt } = said;
		const capped = capOf(group.byId.get(nodeId)!) < 1;
		detected.fastBytes = Math.max(detected.fastBytes, encodeFast(group, nodeId).length);
		detected.slowBytes = Math.max(detected.slowBytes, encodeSlow(group, nodeId).length);
		detected.looks.push({
			bayIndex,
			atMs,
			state,
			confidence,
			doubt: doubt?.reason ?? null,
			capped
		});
	}
}
