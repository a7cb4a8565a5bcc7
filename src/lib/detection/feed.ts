import type { HistoryEntry } from './types';

/** An event as it was told, with the feed's own id. */
export type Told<Id> = Pick<HistoryEntry, 'nodeId' | 'type' | 'state' | 'atMs'> & { eventId: Id };

/** A time moved by less is not told again (method, 'History and feed'). */
const SAME_WITHIN_MS = 60_000;

export interface FeedDifference<Id> {
	voids: Told<Id>[];
	enters: HistoryEntry[];
}

const alike = (told: Told<unknown>, entry: HistoryEntry): boolean =>
	told.nodeId === entry.nodeId &&
	told.type === entry.type &&
	told.state === entry.state &&
	Math.abs(told.atMs - entry.atMs) < SAME_WITHIN_MS;

/** Nearest untaken entry that says the same as what was told; -1 when there is none. */
function nearest(
	told: Told<unknown>,
	now: readonly HistoryEntry[],
	taken: ReadonlySet<number>
): number {
	let best = -1;
	let bestMs = Infinity;
	for (const [i, entry] of now.entries()) {
		const offMs = Math.abs(entry.atMs - told.atMs);
		if (taken.has(i) || offMs >= bestMs || !alike(told, entry)) continue;
		[best, bestMs] = [i, offMs];
	}
	return best;
}

/** What must be taken back and what must be told, when history changed from `told` to `now`. */
export function diffHistory<Id>(
	told: readonly Told<Id>[],
	now: readonly HistoryEntry[]
): FeedDifference<Id> {
	const taken = new Set<number>();
	const voids: Told<Id>[] = [];
	for (const event of [...told].sort((a, b) => a.atMs - b.atMs)) {
		const match = nearest(event, now, taken);
		if (match < 0) voids.push(event);
		else taken.add(match);
	}
	return { voids, enters: now.filter((_, i) => !taken.has(i)) };
}
