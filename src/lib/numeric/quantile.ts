import { median as medianOf, quantile as quantileOf } from 'simple-statistics';

/** Middle value, the mean of the two middle ones when even. Throws on an empty list: a bug of the caller. */
export const median = (values: readonly number[]): number => medianOf(values);

/** Quantile for a share of 0 to 1, straight between order statistics (type 7). Throws on an empty list. */
export const quantile = (values: readonly number[], share: number): number =>
	quantileOf(values, share);

/**
 * Value at which half of the weight is reached, values rising. Own code: the package's weighted quantile
 * interpolates between values, which drags an outlier's weight in.
 */
export function weightedMedian(values: readonly number[], weights: readonly number[]): number {
	const order = values
		.map((_, i) => i)
		.sort((a, b) => (values[a] as number) - (values[b] as number));
	const half = weights.reduce((sum, weight) => sum + weight, 0) / 2;
	let reached = 0;
	for (const [place, i] of order.entries()) {
		reached += weights[i] as number;
		if (reached > half) return values[i] as number;
		if (reached === half) {
			const next = order[place + 1];
			return next === undefined
				? (values[i] as number)
				: ((values[i] as number) + (values[next] as number)) / 2;
		}
	}
	throw new RangeError('weighted median of nothing');
}
