import { magnitude, scale, subtract } from '$lib/magnetics/vector';
import { fieldAtReference } from '$lib/magnetics/set-reset';
import { add } from '$lib/magnetics/vector';
import type { DriftMemory } from './codec';
import { namedCause, sureMagnitude } from './decompose';
import { explainedBy, splitSlope, surroundingsKind } from './pairs';
import type { NodeDrift } from './node-drift';
import type { DriftSettings } from './params';
import { daysToLimit, rateOf, type DaysToLimit, type Rate } from './rate';
import {
	refreshNeed,
	visitNeed,
	type PairAtReference,
	type RefreshNeed,
	type VisitReason
} from './refresh-need';
import type { Cause, HourParts, NamedCause, SurroundingsKind } from './types';
import { CAUSE_WORDS, NOTE_WORDS, VISIT_WORDS } from './words';

/** All that people and programs are told of one node's drift as of its last judged hour. */
export interface DriftSummary {
	/** Null before the first closed vacant hour. */
	parts: HourParts | null;
	/** Unexplained less 2 standard errors, mG; null = it cannot be judged. */
	sureMg: number | null;
	cause: NamedCause | null;
	drifting: { sinceMs: number; by: 'level' | 'cusum' } | null;
	refresh: RefreshNeed;
	visit: VisitReason[];
	rate: Rate | null;
	daysToLimit: DaysToLimit | null;
	next: string;
}

/** What is smaller than this share of the drifting limit is not worth a name. */
const NAMED_SHARE = 0.5;

export function summarize(
	memory: DriftMemory,
	settings: DriftSettings,
	invertedSinceMs: number | null
): DriftSummary {
	const { drift } = memory;
	const parts = drift.last;
	const rate = rateOf(drift.watch.days, settings);
	const cause =
		parts === null
			? null
			: namedCause(parts, kindOf(drift, settings), NAMED_SHARE * settings.driftingMg);
	const { driftingSinceMs, driftingBy } = drift.watch;
	const refresh = refreshNeedOf(memory, settings, invertedSinceMs);
	const visit = visitNeed(pairsAtReference(drift), drift.reference.fieldMg, settings);
	return {
		parts,
		sureMg:
			parts === null || parts.errorMg === null
				? null
				: sureMagnitude(parts.unexplainedMg, parts.errorMg),
		cause,
		drifting:
			driftingSinceMs === null || driftingBy === null
				? null
				: { sinceMs: driftingSinceMs, by: driftingBy },
		refresh,
		visit,
		rate,
		daysToLimit: parts === null ? null : daysToLimit(parts.unexplainedMg, rate, settings),
		next: nextStep(refresh, visit, cause?.cause ?? null, parts)
	};
}

/** Whether a film refresh is due, and why (method 6). */
export function refreshNeedOf(
	{ drift, film }: DriftMemory,
	settings: DriftSettings,
	invertedSinceMs: number | null
): RefreshNeed {
	const { refreshHours, refreshBeganMs } = drift.watch;
	return refreshNeed({ ...film, invertedSinceMs, refreshHours, refreshBeganMs }, settings);
}

function kindOf(drift: NodeDrift, settings: DriftSettings): SurroundingsKind {
	const { reference, pairs, tempcoPerC, slope } = drift;
	const { surroundingsMg } = explainedBy(reference, pairs, tempcoPerC, slope);
	return surroundingsKind(reference.fieldMg, add(reference.fieldMg, surroundingsMg), settings);
}

/** The kept pairs at the reference's temperature (method 2). */
function pairsAtReference({ reference, pairs, tempcoPerC, slope }: NodeDrift): PairAtReference[] {
	const { offset } = splitSlope(reference, tempcoPerC, slope, pairs.offsetPerC);
	return pairs.kept.map(({ atMs, fieldMg, offsetMg, tempC }) => {
		const referenceC = reference.tempC ?? tempC;
		return {
			atMs,
			offsetMg: subtract(offsetMg, scale(offset, tempC - referenceC)),
			fieldMg:
				atMs === pairs.vacant?.atMs
					? fieldAtReference(fieldMg, tempcoPerC, tempC, referenceC)
					: null
		};
	});
}

function nextStep(
	refresh: RefreshNeed,
	visit: readonly VisitReason[],
	cause: Cause | null,
	parts: HourParts | null
): string {
	if (refresh.due) return 'a film refresh';
	const first = visit[0];
	if (first !== undefined) return `a visit: ${VISIT_WORDS[first]}`;
	if (cause !== null) return CAUSE_WORDS[cause].next;
	if (parts === null) return 'nothing yet: no hour of the empty bay is judged';
	const note = parts.notes.find((n) => n === 'no_pair' || n === 'slope_not_known');
	return note === undefined ? 'nothing to do' : `wait: ${NOTE_WORDS[note]}`;
}

/** Length of the rate, mG a day. */
export const rateLength = (rate: Rate | null): number | null =>
	rate === null ? null : magnitude(rate.mgPerDay);
