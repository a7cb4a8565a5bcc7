import { magnitude, subtract, type Vec3 } from '$lib/magnetics/vector';
import type { DriftSettings } from './params';

/** What is known of a node's film (method 6). Times in UTC ms; null = never. */
export interface FilmFacts {
	lastPulseAtMs: number | null;
	lastClippedAtMs: number | null;
	/** A reading over the profile's film limit. */
	lastOverFilmAtMs: number | null;
	invertedSinceMs: number | null;
	/** Run of hours with unexplained at the refresh limit (watch.ts). */
	refreshHours: number;
	refreshBeganMs: number | null;
}

export type RefreshReason = 'clipped' | 'over_film_limit' | 'inverted' | 'unexplained';

export interface RefreshNeed {
	due: boolean;
	reasons: { reason: RefreshReason; sinceMs: number }[];
}

/**
 * When a film refresh is due: something a pulse cures. A pulse since takes a reason away; a moved offset or
 * gain that pairs still show is none (see `visitNeed`).
 */
export function refreshNeed(facts: FilmFacts, settings: DriftSettings): RefreshNeed {
	const reasons: RefreshNeed['reasons'] = [];
	const since = (reason: RefreshReason, atMs: number | null) => {
		if (atMs !== null && atMs > (facts.lastPulseAtMs ?? -Infinity))
			reasons.push({ reason, sinceMs: atMs });
	};
	since('clipped', facts.lastClippedAtMs);
	since('over_film_limit', facts.lastOverFilmAtMs);
	if (facts.invertedSinceMs !== null)
		reasons.push({ reason: 'inverted', sinceMs: facts.invertedSinceMs });
	if (facts.refreshHours >= settings.refreshHours) since('unexplained', facts.refreshBeganMs);
	return { due: reasons.length > 0, reasons };
}

/** A pair at reference temperature: offset O° and field B°. */
export interface PairAtReference {
	atMs: number;
	offsetMg: Vec3;
	/** Null where a vehicle stood on or beside the bay: then the pair tells of the bridge alone (method 5). */
	fieldMg: Vec3 | null;
}

export type VisitReason = 'offset_unsteady' | 'gain_off';

const DAY_MS = 86_400_000;

/** Jumps of the offset from one pair to the next. */
function jumps(pairs: readonly PairAtReference[], leastMg: number): PairAtReference[] {
	return pairs.filter((pair, i) => {
		const before = pairs[i - 1];
		return before !== undefined && magnitude(subtract(pair.offsetMg, before.offsetMg)) >= leastMg;
	});
}

/**
 * What no pulse cures and a person should see: an offset that moved by 20 mG twice in 30 days, or |B°| of the
 * last pair off by 7 % from the reference. Pairs in order of time.
 */
export function visitNeed(
	pairs: readonly PairAtReference[],
	referenceMg: Vec3,
	settings: DriftSettings
): VisitReason[] {
	const last = pairs.at(-1);
	if (last === undefined) return [];
	const recent = jumps(pairs, settings.visitOffsetMg).filter(
		({ atMs }) => atMs > last.atMs - settings.visitOffsetDays * DAY_MS
	);
	const fieldMg = pairs.findLast((pair) => pair.fieldMg !== null)?.fieldMg ?? referenceMg;
	const gain = Math.abs(magnitude(fieldMg) / magnitude(referenceMg) - 1);
	const reasons: VisitReason[] = [];
	if (recent.length >= 2) reasons.push('offset_unsteady');
	if (gain >= settings.visitGain) reasons.push('gain_off');
	return reasons;
}
