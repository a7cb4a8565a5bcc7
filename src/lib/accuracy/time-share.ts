import type { Limits } from '$lib/numeric/wilson';
import { bootstrapShare } from './share';

/** A state from `atMs` on, until the next. In order of time. */
export interface Change<State extends string> {
	atMs: number;
	state: State;
}

/** One bay: what was true and what was said. Before the first change a state is not known and not counted. */
export interface BayTimes {
	truth: readonly Change<'occupied' | 'vacant'>[];
	said: readonly Change<'occupied' | 'vacant' | 'unknown'>[];
}

export interface TimeCount {
	rightMs: number;
	wrongMs: number;
	unknownMs: number;
}

/** Time of one bay within [fromMs, toMs) in which what was said was right, wrong, or nothing. */
export function bayTime({ truth, said }: BayTimes, fromMs: number, toMs: number): TimeCount {
	const count: TimeCount = { rightMs: 0, wrongMs: 0, unknownMs: 0 };
	let t = 0;
	let s = 0;
	let now = fromMs;
	while (now < toMs) {
		while ((truth[t]?.atMs ?? Infinity) <= now) t++;
		while ((said[s]?.atMs ?? Infinity) <= now) s++;
		const next = Math.min(toMs, truth[t]?.atMs ?? Infinity, said[s]?.atMs ?? Infinity);
		const really = truth[t - 1]?.state;
		const spoken = said[s - 1]?.state ?? 'unknown';
		if (really !== undefined) add(count, really, spoken, next - now);
		now = next;
	}
	return count;
}

function add(count: TimeCount, really: string, spoken: string, ms: number): void {
	if (spoken === 'unknown') count.unknownMs += ms;
	else if (spoken === really) count.rightMs += ms;
	else count.wrongMs += ms;
}

export interface TimeShares {
	hours: number;
	bays: number;
	/** Of the time in which something was said. */
	rightOfKnown: number | null;
	rightOfKnownLimits: Limits | null;
	/** Of all time: not known counts as wrong. */
	rightOfAll: number | null;
	rightOfAllLimits: Limits | null;
	unknown: number | null;
}

const HOUR_MS = 3_600_000;

/** Shares of time over bays. Limits by resampling bays only: time has no independent looks (method 9). */
export function timeShares(counts: readonly TimeCount[], seed: number): TimeShares {
	const sum = (of: (count: TimeCount) => number) =>
		counts.reduce((total, count) => total + of(count), 0);
	const known = ({ rightMs, wrongMs }: TimeCount) => rightMs + wrongMs;
	const all = (count: TimeCount) => known(count) + count.unknownMs;
	const over = (hits: number, n: number) => (n === 0 ? null : hits / n);
	const limits = (of: (count: TimeCount) => number) =>
		bootstrapShare(
			counts.map((count) => ({ hits: count.rightMs, n: of(count) })),
			seed
		);
	const right = sum(({ rightMs }) => rightMs);
	return {
		hours: sum(all) / HOUR_MS,
		bays: counts.length,
		rightOfKnown: over(right, sum(known)),
		rightOfKnownLimits: limits(known),
		rightOfAll: over(right, sum(all)),
		rightOfAllLimits: limits(all),
		unknown: over(
			sum(({ unknownMs }) => unknownMs),
			sum(all)
		)
	};
}
