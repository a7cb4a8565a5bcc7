import { EXACT_TO, exactHalfWidth, tieSizes, varianceOfS } from './kendall';
import { twoSidedZ } from './normal';
import { median } from './quantile';

export interface TheilSenLine {
	slope: number;
	/** Median of y - slope · t (Sen 1968), not median(y) - slope · median(t). */
	intercept: number;
	/** Sen's limits of the slope. */
	low: number;
	high: number;
	/** Pairs with different t. */
	pairs: number;
}

export interface SenOptions {
	/** Two-sided level of the limits. */
	level?: number;
	/** Widens the limits for autocorrelated values (`hamedRaoFactor`), as a factor of the variance of S. */
	varianceFactor?: number;
}

function sortedSlopes(t: readonly number[], y: readonly number[]): number[] {
	const slopes: number[] = [];
	for (let i = 0; i < t.length; i++) {
		for (let j = i + 1; j < t.length; j++) {
			const dt = (t[j] as number) - (t[i] as number);
			if (dt !== 0) slopes.push(((y[j] as number) - (y[i] as number)) / dt);
		}
	}
	return slopes.sort((a, b) => a - b);
}

/** Half-width of the limits in ranks of slopes: exact for few distinct t, normal for many. */
function halfWidth(t: readonly number[], level: number, varianceFactor: number): number {
	const ties = tieSizes(t);
	if (t.length <= EXACT_TO && ties.length === 0 && varianceFactor === 1)
		return exactHalfWidth(t.length, level);
	return twoSidedZ(level) * Math.sqrt(varianceOfS(t.length, ties) * varianceFactor);
}

/** The k-th value of 1 … n, clamped to the ends. */
const ranked = (sorted: readonly number[], k: number): number =>
	sorted[Math.min(sorted.length, Math.max(1, k)) - 1] as number;

/**
 * Line by the median of pairwise slopes with Sen's distribution-free limits (Theil 1950; Sen, JASA 63 (1968)
 * 1379). Own code: no package at hand has it. Null when no two t differ. n² pairs: for up to some hundreds.
 */
export function theilSen(
	t: readonly number[],
	y: readonly number[],
	{ level = 0.95, varianceFactor = 1 }: SenOptions = {}
): TheilSenLine | null {
	const slopes = sortedSlopes(t, y);
	if (slopes.length === 0) return null;
	const slope = median(slopes);
	const intercept = median(y.map((value, i) => value - slope * (t[i] as number)));
	const width = halfWidth(t, level, varianceFactor);
	const lower = Math.floor((slopes.length - width) / 2);
	const upper = Math.ceil((slopes.length + width) / 2) + 1;
	return {
		slope,
		intercept,
		low: ranked(slopes, lower),
		high: ranked(slopes, upper),
		pairs: slopes.length
	};
}
