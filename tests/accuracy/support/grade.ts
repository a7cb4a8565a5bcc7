import { matchEvents, scoreEvents, strictTolerance } from '$lib/accuracy/events';
import { bayTime, type BayTimes, type TimeCount } from '$lib/accuracy/time-share';
import type { Generated } from '../../../simulator/generate';
import type { Stay } from '../../../simulator/truth';
import { apartAt, apartWindows, staysOf } from './apart';
import type { Detected, Look } from './detect';
import { explain } from './explain';
import { oracleTime, truthOf } from './oracle';

type EventType = 'arrival' | 'departure';

/** A change as a detector told it; `bay` is the bay's index as text. */
export interface SaidChange {
	bay: string;
	type: EventType;
	atMs: number;
	uncertaintyS: number;
	evidence: string;
}

export interface Miss {
	kind: 'missed' | 'false';
	bayIndex: number;
	type: EventType;
	atMs: number;
	why: string;
}

/** What a detector made of one site; counts, so that runs can be added up. */
export interface Score {
	truths: number;
	hits: number;
	/** Hits within 60 s (method 9). */
	strictHits: number;
	falses: number;
	/** True events that method 11 reports apart, by reason. */
	apart: Record<string, number>;
	misses: Miss[];
	time: TimeCount;
	/** The same for one who knows the truth at each row heard and nothing between: the bound of `time`. */
	oracle: TimeCount;
	nodeWeeks: number;
}

const WEEK_MS = 7 * 86_400_000;
/** The last quarter hour is not judged: its events may not be decided yet. */
const TAIL_MS = 15 * 60_000;

export const noScore = (): Score => ({
	truths: 0,
	hits: 0,
	strictHits: 0,
	falses: 0,
	apart: {},
	misses: [],
	time: { rightMs: 0, wrongMs: 0, unknownMs: 0 },
	oracle: { rightMs: 0, wrongMs: 0, unknownMs: 0 },
	nodeWeeks: 0
});

export const figuresOf = ({ truths, hits, falses }: Score) =>
	scoreEvents({
		matched: Array.from({ length: hits }),
		missed: Array.from({ length: truths - hits }),
		false: Array.from({ length: falses })
	});

function trueChanges(generated: Generated, bayIndex: number) {
	const { judgedFromMs, toMs, stays } = generated.truth;
	return staysOf(stays, bayIndex)
		.flatMap(({ fromMs, toMs: leftMs }) => [
			{ bay: String(bayIndex), type: 'arrival' as const, atMs: fromMs },
			{ bay: String(bayIndex), type: 'departure' as const, atMs: leftMs }
		])
		.filter(({ atMs }) => atMs >= judgedFromMs && atMs < toMs - TAIL_MS);
}

function gradeBay(
	generated: Generated,
	bayIndex: number,
	said: readonly SaidChange[],
	score: Score
): void {
	const { judgedFromMs, toMs } = generated.truth;
	const windows = apartWindows(generated, bayIndex);
	const truths = trueChanges(generated, bayIndex);
	const matching = matchEvents(truths, said);
	const counts = ({ atMs }: { atMs: number }) => apartAt(windows, atMs) === null;
	const missed = matching.missed.filter(counts);
	const wrong = matching.false.filter(
		(event) => counts(event) && event.atMs >= judgedFromMs && event.atMs < toMs - TAIL_MS
	);
	score.truths += truths.filter(counts).length;
	score.hits += matching.matched.filter(({ truth }) => counts(truth)).length;
	score.strictHits += matchEvents(truths.filter(counts), said, strictTolerance).matched.length;
	score.falses += wrong.length;
	for (const { atMs } of truths) {
		const why = apartAt(windows, atMs);
		if (why !== null) score.apart[why] = (score.apart[why] ?? 0) + 1;
	}
	for (const { type, atMs } of missed) {
		const why = explain(generated, bayIndex, atMs);
		score.misses.push({ kind: 'missed', bayIndex, type, atMs, why });
	}
	for (const { type, atMs, evidence } of wrong) {
		const why = `${explain(generated, bayIndex, atMs)} | said: ${evidence}`;
		score.misses.push({ kind: 'false', bayIndex, type, atMs, why });
	}
}

type SaidState = BayTimes['said'][number];

/** Adds the share of time in the right state; a bay reported apart as a whole is left out. */
function timeBay(generated: Generated, bayIndex: number, said: SaidState[], score: Score): void {
	const { judgedFromMs, toMs } = generated.truth;
	if (apartAt(apartWindows(generated, bayIndex), toMs) !== null) return;
	const truth = truthOf(generated, bayIndex);
	addTime(score.time, bayTime({ truth, said }, judgedFromMs, toMs));
}

function addTime(sum: TimeCount, { rightMs, wrongMs, unknownMs }: TimeCount): void {
	sum.rightMs += rightMs;
	sum.wrongMs += wrongMs;
	sum.unknownMs += unknownMs;
}

/** Grades any detector's changes and states, bay by bay, by method 9. */
export function gradeSaid(
	generated: Generated,
	changesOf: (bayIndex: number) => readonly SaidChange[],
	statesOf: (bayIndex: number) => SaidState[]
): Score {
	const score = noScore();
	generated.plan.bays.forEach((_, bayIndex) => {
		gradeBay(generated, bayIndex, changesOf(bayIndex), score);
		timeBay(generated, bayIndex, statesOf(bayIndex), score);
	});
	const { fromMs, toMs } = generated.truth;
	score.nodeWeeks = (generated.plan.nodes.length * (toMs - fromMs)) / WEEK_MS;
	return score;
}

function changesOf(detected: Detected, bayIndex: number): SaidChange[] {
	const bay = String(bayIndex);
	return detected.entries.flatMap(({ bayIndex: of, type, atMs, uncertaintyS, evidence }) =>
		of === bayIndex && (type === 'arrival' || type === 'departure')
			? [{ bay, type, atMs, uncertaintyS, evidence: evidence.because.join('; ') }]
			: []
	);
}

/** Grades our own detection, beside the bound of its time. */
export function grade(generated: Generated, detected: Detected): Score {
	const score = gradeSaid(
		generated,
		(bayIndex) => changesOf(detected, bayIndex),
		(bayIndex) => statesOf(detected, bayIndex)
	);
	return { ...score, oracle: oracleTime(generated) };
}

export const statesOf = (detected: Detected, bayIndex: number): SaidState[] =>
	detected.entries
		.filter((entry) => entry.bayIndex === bayIndex)
		.map(({ atMs, state }) => ({ atMs, state }));

/** Adds up runs. */
export function addScores(scores: readonly Score[]): Score {
	const sum = noScore();
	for (const score of scores) {
		sum.truths += score.truths;
		sum.hits += score.hits;
		sum.strictHits += score.strictHits;
		sum.falses += score.falses;
		sum.misses.push(...score.misses);
		addTime(sum.time, score.time);
		addTime(sum.oracle, score.oracle);
		sum.nodeWeeks += score.nodeWeeks;
		for (const [why, n] of Object.entries(score.apart)) {
			sum.apart[why] = (sum.apart[why] ?? 0) + n;
		}
	}
	return sum;
}

/** Whether a bay was really taken at an instant. */
export const takenAt = (stays: readonly Stay[], look: Pick<Look, 'bayIndex' | 'atMs'>): boolean =>
	stays.some(
		(stay) => stay.bayIndex === look.bayIndex && stay.fromMs <= look.atMs && stay.toMs > look.atMs
	);
