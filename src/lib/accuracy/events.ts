/** A change that really happened at a bay. */
export interface TrueEvent {
	bay: string;
	type: 'arrival' | 'departure';
	atMs: number;
}

/** A change that was said; `uncertaintyS` as it was entered with it. */
export interface SaidEvent extends TrueEvent {
	uncertaintyS: number;
}

export type Tolerance = (said: SaidEvent) => number;

/** Method 9: max(60 s, own uncertainty + 30 s), at most 150 s. */
export const ownTolerance: Tolerance = ({ uncertaintyS }) =>
	Math.min(150_000, Math.max(60_000, uncertaintyS * 1000 + 30_000));
/** Printed beside it. */
export const strictTolerance: Tolerance = () => 60_000;

export interface Matching<T extends TrueEvent, S extends SaidEvent> {
	matched: { truth: T; said: S; lateMs: number }[];
	missed: T[];
	false: S[];
}

interface Window<S> {
	said: S;
	fromMs: number;
	toMs: number;
}

/**
 * One bay and type: true events are points, said ones windows. Going through the points in time and giving
 * each the open window that closes first makes the largest one-to-one matching there is.
 */
function matchLine<T extends TrueEvent, S extends SaidEvent>(
	truths: readonly T[],
	saids: readonly S[],
	tolerance: Tolerance,
	into: Matching<T, S>
): void {
	const windows = saids
		.map((said): Window<S> => {
			const reachMs = tolerance(said);
			return { said, fromMs: said.atMs - reachMs, toMs: said.atMs + reachMs };
		})
		.sort((a, b) => a.fromMs - b.fromMs);
	const open: Window<S>[] = [];
	let next = 0;
	for (const truth of [...truths].sort((a, b) => a.atMs - b.atMs)) {
		for (; (windows[next]?.fromMs ?? Infinity) <= truth.atMs; next++)
			open.push(windows[next] as Window<S>);
		const taken = takeFirstClosing(open, truth.atMs, into);
		if (taken === null) into.missed.push(truth);
		else into.matched.push({ truth, said: taken, lateMs: taken.atMs - truth.atMs });
	}
	for (const { said } of [...open, ...windows.slice(next)]) into.false.push(said);
}

/** Removes windows that have closed (false events) and the one that closes first of those still open. */
function takeFirstClosing<T extends TrueEvent, S extends SaidEvent>(
	open: Window<S>[],
	atMs: number,
	into: Matching<T, S>
): S | null {
	let best = -1;
	for (let i = open.length - 1; i >= 0; i--) {
		const window = open[i] as Window<S>;
		if (window.toMs < atMs) {
			into.false.push(window.said);
			open.splice(i, 1);
			if (best > i) best--;
		} else if (best < 0 || window.toMs < (open[best] as Window<S>).toMs) best = i;
	}
	return best < 0 ? null : ((open.splice(best, 1)[0] as Window<S>).said ?? null);
}

function byLine<E extends TrueEvent>(events: readonly E[]): Map<string, E[]> {
	const lines = new Map<string, E[]>();
	for (const event of events) {
		const key = `${event.type} ${event.bay}`;
		const line = lines.get(key);
		if (line === undefined) lines.set(key, [event]);
		else line.push(event);
	}
	return lines;
}

/** Matches said events with true ones of the same bay and type, one to one, within the tolerance. */
export function matchEvents<T extends TrueEvent, S extends SaidEvent>(
	truths: readonly T[],
	saids: readonly S[],
	tolerance: Tolerance = ownTolerance
): Matching<T, S> {
	const matching: Matching<T, S> = { matched: [], missed: [], false: [] };
	const truthLines = byLine(truths);
	const saidLines = byLine(saids);
	for (const key of new Set([...truthLines.keys(), ...saidLines.keys()]))
		matchLine(truthLines.get(key) ?? [], saidLines.get(key) ?? [], tolerance, matching);
	return matching;
}

export interface EventScore {
	matched: number;
	missed: number;
	false: number;
	/** Null where nothing was said, or nothing happened. */
	precision: number | null;
	recall: number | null;
	f1: number | null;
}

/** Precision, recall and their harmonic mean. */
export function scoreEvents(matching: {
	matched: readonly unknown[];
	missed: readonly unknown[];
	false: readonly unknown[];
}): EventScore {
	const matched = matching.matched.length;
	const missed = matching.missed.length;
	const wrong = matching.false.length;
	const over = (n: number) => (n === 0 ? null : matched / n);
	return {
		matched,
		missed,
		false: wrong,
		precision: over(matched + wrong),
		recall: over(matched + missed),
		f1: matched + missed + wrong === 0 ? null : (2 * matched) / (2 * matched + missed + wrong)
	};
}
