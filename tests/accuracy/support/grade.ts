import type { Generated } from '../../../simulator/generate';
import type { Incident, Stay } from '../../../simulator/truth';
import type { Detected, Look } from './detect';

export interface TruthEvent {
	bayIndex: number;
	type: 'arrival' | 'departure';
	atMs: number;
	stay: Stay;
	/** Why it does not count towards F1; null = it counts. */
	apart: string | null;
}

export interface DetectedEvent {
	bayIndex: number;
	type: 'arrival' | 'departure';
	atMs: number;
	uncertaintyS: number;
	evidence: string;
}

export interface Miss {
	kind: 'missed' | 'false';
	bayIndex: number;
	type: 'arrival' | 'departure';
	atMs: number;
	why: string;
}

export interface Score {
	truths: number;
	hits: number;
	strictHits: number;
	falses: number;
	apart: Record<string, number>;
	precision: number;
	recall: number;
	f1: number;
	misses: Miss[];
	/** Shares of bay time from the judged start on. */
	right: number;
	unknown: number;
	nodeWeeks: number;
}

const MINUTE_MS = 60_000;
const WEEK_MS = 7 * 86_400_000;
const STRICT_MS = 60_000;
const WIDEST_MS = 150_000;
/** The last quarter hour is not judged: its events may not be decided yet. */
const TAIL_MS = 15 * MINUTE_MS;

/** method 9: matched within max(60 s, own uncertainty + 30 s), at most 150 s. */
const toleranceMs = (event: DetectedEvent): number =>
	Math.min(WIDEST_MS, Math.max(STRICT_MS, (event.uncertaintyS + 30) * 1000));

interface Window {
	fromMs: number;
	toMs: number;
	why: string;
}

/** Stretches of a bay's time that method 11 has reported apart. */
export function apartWindows(generated: Generated, bayIndex: number): Window[] {
	const { truth, plan, scenario } = generated;
	const windows: Window[] = [];
	const nodeIndex = plan.nodes.findIndex((node) => node.bayIndex === bayIndex);
	for (const incident of truth.incidents) {
		if (incident.nodeIndex !== nodeIndex || incident.kind !== 'magnet') continue;
		if (witnessed(generated, nodeIndex, incident.atMs)) continue;
		const fromMs = incident.atMs - MINUTE_MS;
		windows.push({
			fromMs,
			toMs: nextPulseMs(generated, nodeIndex, incident.atMs),
			why: 'magnet without a witness row'
		});
	}
	const own = staysOf(truth.stays, bayIndex);
	if (scenario.network.heartbeatsOnly)
		windows.push(...shortSpans(own, 3 * scenario.periodS * 1000));
	const first = own[0];
	if (first !== undefined && first.fromMs < truth.fromMs && first.toMs > truth.fromMs) {
		windows.push({ fromMs: 0, toMs: Infinity, why: 'reference learned under a vehicle' });
	}
	return windows;
}

const staysOf = (stays: readonly Stay[], bayIndex: number): Stay[] =>
	stays.filter((stay) => stay.bayIndex === bayIndex).sort((a, b) => a.fromMs - b.fromMs);

/** Heartbeats only: stays and gaps under 3 periods (method 11). */
function shortSpans(own: readonly Stay[], leastMs: number): Window[] {
	const why = 'stay or gap under 3 periods';
	return own.flatMap((stay, i) => {
		const windows: Window[] = [];
		if (stay.toMs - stay.fromMs < leastMs)
			windows.push({ fromMs: stay.fromMs, toMs: stay.toMs, why });
		const next = own[i + 1];
		if (next !== undefined && next.fromMs - stay.toMs < leastMs) {
			windows.push({ fromMs: stay.toMs, toMs: next.fromMs, why });
		}
		return windows;
	});
}

/** True when a row that came through shows the overload or a field past what the film bears. */
function witnessed(generated: Generated, nodeIndex: number, atMs: number): boolean {
	const log = generated.logs[nodeIndex]!;
	const limit = 4000 * 16.384;
	const heard = new Set(generated.deliveries[nodeIndex]!.message);
	for (let m = 0; m < log.count; m++) {
		const firstMs = log.firstAtMs.values[m]!;
		if (firstMs > atMs + 10_000) break;
		if (firstMs < atMs - 130_000 || !heard.has(m)) continue;
		const from = log.rowFrom.values[m]! * 3;
		for (let k = from; k < from + log.rowCount.values[m]! * 3; k++) {
			if (Math.abs(log.counts.values[k]!) > limit) return true;
		}
	}
	return false;
}

function nextPulseMs(generated: Generated, nodeIndex: number, atMs: number): number {
	const log = generated.logs[nodeIndex]!;
	const heard = new Set(generated.deliveries[nodeIndex]!.message);
	let next = Infinity;
	for (const [m, frame] of log.others) {
		const pulseMs = log.firstAtMs.values[m]!;
		if (heard.has(m) && frame.kind !== 'reading' && pulseMs > atMs) next = Math.min(next, pulseMs);
	}
	return next + 5 * MINUTE_MS;
}

const windowAt = (windows: readonly Window[], atMs: number): string | null =>
	windows.find((window) => atMs >= window.fromMs && atMs <= window.toMs)?.why ?? null;

function truthEvents(
	generated: Generated,
	bayIndex: number,
	windows: readonly Window[]
): TruthEvent[] {
	const { judgedFromMs, toMs, stays } = generated.truth;
	return staysOf(stays, bayIndex).flatMap((stay) =>
		(['arrival', 'departure'] as const)
			.map((type) => ({ bayIndex, type, atMs: type === 'arrival' ? stay.fromMs : stay.toMs, stay }))
			.filter(({ atMs }) => atMs >= judgedFromMs && atMs < toMs - TAIL_MS)
			.map((event) => ({ ...event, apart: windowAt(windows, event.atMs) }))
	);
}

/** Pairs events of one bay and type in time order, nearest first; each is used once. */
function matchEvents(
	truths: readonly TruthEvent[],
	found: readonly DetectedEvent[]
): Map<number, number> {
	const pairs: [number, number, number][] = [];
	truths.forEach((truth, t) =>
		found.forEach((event, f) => {
			const apartMs = Math.abs(truth.atMs - event.atMs);
			if (truth.type === event.type && apartMs <= toleranceMs(event)) pairs.push([apartMs, t, f]);
		})
	);
	pairs.sort((a, b) => a[0] - b[0]);
	const [byTruth, used] = [new Map<number, number>(), new Set<number>()];
	for (const [, t, f] of pairs) {
		if (byTruth.has(t) || used.has(f)) continue;
		byTruth.set(t, f);
		used.add(f);
	}
	return byTruth;
}

export const detectedEvents = (detected: Detected, bayIndex: number): DetectedEvent[] =>
	detected.entries
		.filter((entry) => entry.bayIndex === bayIndex)
		.flatMap(({ type, atMs, uncertaintyS, evidence }): DetectedEvent[] =>
			type === 'arrival' || type === 'departure'
				? [{ bayIndex, type, atMs, uncertaintyS, evidence: evidence.because.join('; ') }]
				: []
		);

/** What of the truth stands near a miss, in words. */
export function explain(generated: Generated, bayIndex: number, atMs: number): string {
	const { truth, plan } = generated;
	const nodeIndex = plan.nodes.findIndex((node) => node.bayIndex === bayIndex);
	const near: string[] = [];
	const say = (incident: Incident) =>
		`${incident.kind} ${incident.mg.toFixed(0)} mG ${signed((incident.atMs - atMs) / 1000)} s`;
	for (const stay of truth.stays) {
		if (stay.bayIndex !== bayIndex || stay.fromMs > atMs + 300_000 || stay.toMs < atMs - 300_000)
			continue;
		near.push(
			`own vehicle ${stay.sizeMg.toFixed(0)} mG ${signed((stay.fromMs - atMs) / 1000)} to ${signed((stay.toMs - atMs) / 1000)} s`
		);
	}
	for (const incident of truth.incidents) {
		if (incident.nodeIndex !== nodeIndex) continue;
		const slow =
			incident.kind === 'loss' || (incident.kind === 'offset' && incident.toMs > incident.atMs);
		const starts = Math.abs(incident.atMs - atMs) < 300_000;
		const ends = Math.abs(incident.toMs - atMs) < 120_000;
		const within = incident.atMs <= atMs && incident.toMs >= atMs;
		if ((slow && within) || starts || ends) near.push(say(incident));
	}
	return near.length === 0 ? 'nothing near' : near.slice(0, 8).join(' · ');
}

const signed = (value: number): string => `${value >= 0 ? '+' : ''}${value.toFixed(0)}`;

interface Tally {
	truths: number;
	hits: number;
	strictHits: number;
	falses: number;
	apart: Record<string, number>;
	misses: Miss[];
}

function tallyBay(
	generated: Generated,
	found: readonly DetectedEvent[],
	bayIndex: number,
	tally: Tally
): void {
	const { judgedFromMs, toMs } = generated.truth;
	const windows = apartWindows(generated, bayIndex);
	const truths = truthEvents(generated, bayIndex, windows);
	const matched = matchEvents(truths, found);
	const usedBy = new Set(matched.values());
	truths.forEach((truth, t) => {
		if (truth.apart !== null) {
			tally.apart[truth.apart] = (tally.apart[truth.apart] ?? 0) + 1;
			return;
		}
		tally.truths++;
		const hit = matched.get(t);
		if (hit !== undefined) {
			tally.hits++;
			if (Math.abs(found[hit]!.atMs - truth.atMs) <= STRICT_MS) tally.strictHits++;
			return;
		}
		const { type, atMs } = truth;
		tally.misses.push({
			kind: 'missed',
			bayIndex,
			type,
			atMs,
			why: explain(generated, bayIndex, atMs)
		});
	});
	found.forEach((event, f) => {
		const { type, atMs } = event;
		if (usedBy.has(f) || atMs < judgedFromMs || atMs >= toMs - TAIL_MS) return;
		if (windowAt(windows, atMs) !== null) return;
		tally.falses++;
		const why = `${explain(generated, bayIndex, atMs)} | said: ${event.evidence}`;
		tally.misses.push({ kind: 'false', bayIndex, type, atMs, why });
	});
}

/** The states a bay was said to be in, as steps in time. */
function stateSteps(detected: Detected, bayIndex: number): { atMs: number; state: string }[] {
	return detected.entries
		.filter((entry) => entry.bayIndex === bayIndex)
		.map(({ atMs, state }) => ({ atMs, state }));
}

function timeShares(generated: Generated, detected: Detected) {
	const { judgedFromMs, toMs, stays } = generated.truth;
	let right = 0;
	let unknown = 0;
	let total = 0;
	generated.plan.bays.forEach((_, bayIndex) => {
		if (windowAt(apartWindows(generated, bayIndex), toMs) !== null) return;
		const edges = [
			...stateSteps(detected, bayIndex).map(({ atMs, state }) => ({ atMs, said: state, is: null })),
			...staysOf(stays, bayIndex).flatMap((stay) => [
				{ atMs: stay.fromMs, said: null, is: 'occupied' },
				{ atMs: stay.toMs, said: null, is: 'vacant' }
			])
		].sort((a, b) => a.atMs - b.atMs);
		let [said, is, atMs] = ['vacant', 'vacant', judgedFromMs];
		for (const edge of [...edges, { atMs: toMs, said: null, is: null }]) {
			const untilMs = Math.min(toMs, Math.max(judgedFromMs, edge.atMs));
			const spanMs = untilMs - atMs;
			total += spanMs;
			if (said === is) right += spanMs;
			if (said === 'unknown') unknown += spanMs;
			atMs = untilMs;
			said = edge.said ?? said;
			is = edge.is ?? is;
		}
	});
	return { right: right / total, unknown: unknown / total };
}

/** Scores what any detector found, by method 9. */
export function score(
	generated: Generated,
	foundOf: (bayIndex: number) => readonly DetectedEvent[]
): Omit<Score, 'right' | 'unknown'> {
	const tally: Tally = { truths: 0, hits: 0, strictHits: 0, falses: 0, apart: {}, misses: [] };
	generated.plan.bays.forEach((_, bayIndex) =>
		tallyBay(generated, foundOf(bayIndex), bayIndex, tally)
	);
	const { truths, hits, falses } = tally;
	const { fromMs, toMs } = generated.truth;
	return {
		...tally,
		precision: hits + falses > 0 ? hits / (hits + falses) : 1,
		recall: truths > 0 ? hits / truths : 1,
		f1: (2 * hits) / (hits + truths + falses),
		nodeWeeks: (generated.plan.nodes.length * (toMs - fromMs)) / WEEK_MS
	};
}

export const grade = (generated: Generated, detected: Detected): Score => ({
	...score(generated, (bayIndex) => detectedEvents(detected, bayIndex)),
	...timeShares(generated, detected)
});

/** Whether a bay was really taken at an instant. */
export const takenAt = (stays: readonly Stay[], look: Pick<Look, 'bayIndex' | 'atMs'>): boolean =>
	stays.some(
		(stay) => stay.bayIndex === look.bayIndex && stay.fromMs <= look.atMs && stay.toMs > look.atMs
	);
