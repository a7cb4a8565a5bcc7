/** A stretch of time in which the bay was one thing and nothing forbids to read the quiet field from it. */
export interface Stretch {
	fromMs: number;
	toMs: number;
	/** Null = vacant; else names the stay by the second it began. */
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

/** Entries in order of time as stretches within [fromMs, toMs); unknown times are left out. */
export function stretchesOf(entries: readonly StateEntry[], { fromMs, toMs }: Span): Stretch[] {
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
