import { EXACT_TO, exactTail, tieSizes, varianceOfS } from './kendall';
import { normalQuantile, twoSidedP } from './normal';
import { theilSen } from './theil-sen';

export interface Trend {
	/** Pairs that rise less pairs that fall. */
	s: number;
	variance: number;
	/** (S ∓ 1) / sqrt(variance), 0 where S is 0. */
	z: number;
	/** Two-sided. Exact for up to 40 values without ties and without a variance factor. */
	p: number;
}

function riseLessFall(values: readonly number[]): number {
	let s = 0;
	for (let i = 0; i < values.length; i++)
		for (let j = i + 1; j < values.length; j++)
			s += Math.sign((values[j] as number) - (values[i] as number));
	return s;
}

/**
 * Mann–Kendall test of values in order of time (EPA QA/G-9S; Kendall's variance with ties). Own code: no
 * package at hand has it. `varianceFactor` widens the variance for autocorrelated values (`hamedRaoFactor`).
 */
export function mannKendall(values: readonly number[], varianceFactor = 1): Trend {
	const n = values.length;
	const s = riseLessFall(values);
	const ties = tieSizes(values);
	const variance = varianceOfS(n, ties) * varianceFactor;
	const z = s === 0 || variance === 0 ? 0 : (s - Math.sign(s)) / Math.sqrt(variance);
	const exact = n <= EXACT_TO && ties.length === 0 && varianceFactor === 1;
	const p = exact ? Math.min(1, 2 * exactTail(n, Math.abs(s))) : twoSidedP(z);
	return { s, variance, z, p: s === 0 ? 1 : p };
}

/** Ranks 1 … n, ties sharing their mean rank. */
export function ranks(values: readonly number[]): number[] {
	const order = values
		.map((_, i) => i)
		.sort((a, b) => (values[a] as number) - (values[b] as number));
	const result = new Array<number>(values.length);
	let from = 0;
	while (from < order.length) {
		let to = from;
		const value = values[order[from] as number];
		while (to < order.length && values[order[to] as number] === value) to++;
		for (let i = from; i < to; i++) result[order[i] as number] = (from + 1 + to) / 2;
		from = to;
	}
	return result;
}

/** Autocorrelation at a lag, both sums over the whole series' mean. */
export function autocorrelation(values: readonly number[], lag: number): number {
	const mean = values.reduce((sum, value) => sum + value, 0) / values.length;
	let cross = 0;
	let square = 0;
	for (const [i, value] of values.entries()) {
		square += (value - mean) ** 2;
		const later = values[i + lag];
		if (later !== undefined) cross += (value - mean) * (later - mean);
	}
	return square === 0 ? 0 : cross / square;
}

/**
 * n / n*_S of Hamed and Rao, J. Hydrol. 204 (1998) 182–196 [M]: how much autocorrelation widens the variance
 * of S. From the ranks of the detrended values, only lags whose autocorrelation is significant at `level`.
 * Held at 1 at least: values that alternate by chance never make a trend look surer than independent ones.
 */
export function hamedRaoFactor(values: readonly number[], level = 0.95): number {
	const n = values.length;
	if (n < 4) return 1;
	const times = values.map((_, i) => i);
	const { slope } = theilSen(times, values) ?? { slope: 0 };
	const rank = ranks(values.map((value, i) => value - slope * i));
	const bound = normalQuantile(0.5 + level / 2) / Math.sqrt(n);
	let sum = 0;
	for (let lag = 1; lag <= n - 3; lag++) {
		const r = autocorrelation(rank, lag);
		if (Math.abs(r) > bound) sum += (n - lag) * (n - lag - 1) * (n - lag - 2) * r;
	}
	return Math.max(1, 1 + (2 * sum) / (n * (n - 1) * (n - 2)));
}
