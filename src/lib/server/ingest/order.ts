/** Where a row stands within its node: (boot, seq, row), never time (protocol, server step 3). */
export interface Order {
	/** How many times a person accepted a boot counter that started anew, before this row. */
	era: number;
	boot: number;
	seq: number;
	row: number;
}

/** Of differences by falling weight, the first that is not 0. */
export function firstDiffering(a: number, b: number, c = 0, d = 0): number {
	if (a !== 0) return a;
	if (b !== 0) return b;
	return c === 0 ? d : c;
}

/** Below zero when a comes before b. */
export const compareOrder = (a: Order, b: Order): number =>
	firstDiffering(a.era - b.era, a.boot - b.boot, a.seq - b.seq, a.row - b.row);

/** The era of a row at an event time, given the rising times at which restarts were accepted. */
export function eraAt(acceptedAtMs: readonly number[], atMs: number): number {
	let era = 0;
	while (era < acceptedAtMs.length && (acceptedAtMs[era] as number) <= atMs) era += 1;
	return era;
}
