import { normalCdf } from './normal';

/** Up to here the distribution of S is counted out; beyond it the normal one is good to three digits. */
export const EXACT_TO = 40;

/**
 * Exact null distribution of Kendall's S for n values without ties: share of orderings by number of
 * inversions 0 … n(n-1)/2, each value inserted in turn. S = pairs - 2 inversions.
 */
export function inversionShares(n: number): readonly number[] {
	let shares = [1];
	for (let m = 2; m <= n; m++) {
		const next = new Array<number>((m * (m - 1)) / 2 + 1).fill(0);
		for (const [inversions, share] of shares.entries()) {
			for (let added = 0; added < m; added++)
				next[inversions + added] = (next[inversions + added] as number) + share / m;
		}
		shares = next;
	}
	return shares;
}

/** P(S >= s) for n values without ties, s > 0. */
export function exactTail(n: number, s: number): number {
	const pairs = (n * (n - 1)) / 2;
	const inversions = Math.floor((pairs - s) / 2);
	return inversionShares(n)
		.slice(0, Math.max(0, inversions + 1))
		.reduce((sum, share) => sum + share, 0);
}

/**
 * Smallest s for which P(|S| >= s) is at most 1 - level, n(n-1)/2 where none is: the half-width of Sen's
 * limits in ranks. Sen's own example takes it so, one rank wider than the least interval of that level.
 */
export function exactHalfWidth(n: number, level: number): number {
	const pairs = (n * (n - 1)) / 2;
	let tail = 0;
	for (const [inversions, share] of inversionShares(n).entries()) {
		tail += share;
		if (2 * tail > 1 - level) return Math.min(pairs, pairs - 2 * inversions + 2);
	}
	return pairs;
}

/** n(n-1)(2n+5) less the same of each run of ties, over 18: variance of S. */
export function varianceOfS(n: number, tieSizes: readonly number[]): number {
	const term = (m: number) => m * (m - 1) * (2 * m + 5);
	return (term(n) - tieSizes.reduce((sum, m) => sum + term(m), 0)) / 18;
}

/** Sizes of the groups of equal values, those of one left out. */
export function tieSizes(values: readonly number[]): number[] {
	const counts = new Map<number, number>();
	for (const value of values) counts.set(value, (counts.get(value) ?? 0) + 1);
	return [...counts.values()].filter((size) => size > 1);
}

/** One-sided normal tail with the continuity correction that S steps by 2. */
export const normalTail = (s: number, variance: number): number =>
	normalCdf(-(s - 1) / Math.sqrt(variance));
