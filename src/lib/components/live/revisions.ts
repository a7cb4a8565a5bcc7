import type { BayBook } from './bay-poll';

/** When each bay last changed in a way that the drawing shows. */
export type ChangedAt = ReadonlyMap<string, number>;
export const NOTHING_CHANGED: ChangedAt = new Map();

/** How long a change keeps its revision cloud. */
const REVISED_MS = 60_000;

/** The changes known so far, less the old ones, with those between two books. */
export function changesNoted(
	known: ChangedAt,
	before: BayBook,
	after: BayBook,
	nowMs: number
): ChangedAt {
	const next = new Map([...known].filter(([, atMs]) => nowMs - atMs < REVISED_MS));
	for (const [code, bay] of after.bays) {
		const old = before.bays.get(code);
		if (old !== undefined && (old.state !== bay.state || old.doubt?.reason !== bay.doubt?.reason))
			next.set(code, nowMs);
	}
	return next;
}

export const stillRevised = (changed: ChangedAt, nowMs: number): string[] =>
	[...changed].filter(([, atMs]) => nowMs - atMs < REVISED_MS).map(([code]) => code);
