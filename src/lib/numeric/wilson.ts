import { twoSidedZ } from './normal';

/** Own code: no package at hand has either interval. */
export interface Limits {
	low: number;
	high: number;
}

const Z95 = twoSidedZ(0.95);
const clamp = (share: number): number => Math.min(1, Math.max(0, share));

/**
 * Wilson score limits of a proportion (Newcombe, Stat. Med. 17 (1998) 857, method 3). `n` may be an effective
 * number, so neither it nor `hits` need be whole. Null where n is 0: no looks, no interval.
 */
export function wilson(hits: number, n: number, z = Z95): Limits | null {
	if (n <= 0) return null;
	const z2 = z * z;
	const middle = 2 * hits + z2;
	const reach = z * Math.sqrt(Math.max(0, z2 + 4 * hits * (1 - hits / n)));
	const under = 2 * (n + z2);
	return {
		low: hits <= 0 ? 0 : clamp((middle - reach) / under),
		high: hits >= n ? 1 : clamp((middle + reach) / under)
	};
}

/** Difference of two proportions, first less second (Newcombe, Stat. Med. 17 (1998) 873, method 10). */
export function newcombeDifference(
	first: { hits: number; n: number },
	second: { hits: number; n: number },
	z = Z95
): (Limits & { difference: number }) | null {
	const a = wilson(first.hits, first.n, z);
	const b = wilson(second.hits, second.n, z);
	if (a === null || b === null) return null;
	const p = first.hits / first.n;
	const q = second.hits / second.n;
	return {
		difference: p - q,
		low: p - q - Math.hypot(p - a.low, b.high - q),
		high: p - q + Math.hypot(a.high - p, q - b.low)
	};
}
