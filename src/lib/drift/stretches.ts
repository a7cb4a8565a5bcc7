/** A stretch of time in which the bay was one thing and nothing forbids to read the quiet field from it. */
export interface Stretch {
	fromMs: number;
	toMs: number;
	/**
	 * Null = vacant, with no vehicle beside it; else names what stands on it or beside it by the second since
	 * when that has been so.
	 */
	stay: string | null;
}

export interface StateEntry {
	atMs: number;
	state: 'vacant' | 'occupied' | 'unknown';
}

interface Span {
	fromMs: number;
	toMs: number;
}

/** Readings this near to a change of state may belong to the movement. */
const EDGE_MS = 10_000;

/**
 * Entries in order of time as stretches within [fromMs, toMs); unknown times are left out. A vehicle on a bay
 * beside it (`near`, one list a bay) moves the level by its echo for as long as it stands there, up to 80 mG: such
 * a stretch is no quiet field, and tells what changes within it, as a stay does.
 */
export function stretchesOf(
	entries: readonly StateEntry[],
	span: Span,
	near: readonly (readonly StateEntry[])[] = []
): Stretch[] {
	return ownStretches(entries, span).flatMap((stretch) => beside(stretch, near));
}

/** Splits a stretch wherever a neighbour's vehicle comes or goes. */
function beside(stretch: Stretch, near: readonly (readonly StateEntry[])[]): Stretch[] {
	const { fromMs, toMs, stay } = stretch;
	const cuts = near
		.flat()
		.flatMap(({ atMs }) => (atMs > fromMs && atMs < toMs ? [atMs] : []))
		.sort((a, b) => a - b);
	return [fromMs, ...cuts].flatMap((at, i): Stretch[] => {
		const end = cuts[i];
		const piece = {
			fromMs: i === 0 ? at : at + EDGE_MS,
			toMs: end === undefined ? toMs : end - EDGE_MS
		};
		if (piece.fromMs >= piece.toMs) return [];
		const now = near.flatMap((list) => list.findLast(({ atMs }) => atMs <= at) ?? []);
		if (!now.some(({ state }) => state === 'occupied')) return [{ ...piece, stay }];
		const sinceS = Math.max(...now.map(({ atMs }) => Math.floor(atMs / 1000)), Number(stay ?? 0));
		return [{ ...piece, stay: String(sinceS) }];
	});
}

function ownStretches(entries: readonly StateEntry[], { fromMs, toMs }: Span): Stretch[] {
	const stretches: Stretch[] = [];
	let stay: string | null = null;
	for (const [i, entry] of entries.entries()) {
		const before = entries[i - 1]?.state;
		if (entry.state !== 'occupied') stay = null;
		else if (before !== 'occupied' || stay === null) stay = String(Math.floor(entry.atMs / 1000));
		if (entry.state === 'unknown') continue;
		const from = entry.atMs <= fromMs ? fromMs : entry.atMs + EDGE_MS;
		const next = entries[i + 1]?.atMs ?? Infinity;
		const to = next >= toMs ? toMs : next - EDGE_MS;
		if (from < to && to > fromMs && from < toMs)
			stretches.push({ fromMs: Math.max(from, fromMs), toMs: Math.min(to, toMs), stay });
	}
	return stretches;
}

/** Takes the times of closures out: a closed bay is out of drift (method 4, 'Closed'). */
export function without(stretches: readonly Stretch[], closed: readonly Span[]): Stretch[] {
	let left: Stretch[] = [...stretches];
	for (const span of closed)
		left = left.flatMap((s) =>
			[
				{ ...s, toMs: Math.min(s.toMs, span.fromMs) },
				{ ...s, fromMs: Math.max(s.fromMs, span.toMs) }
			].filter((part) => part.fromMs < part.toMs)
		);
	return left;
}
