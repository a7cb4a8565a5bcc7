import { median as medianOf, quantile as quantileOf } from 'simple-statistics';

/** Middle value, the mean of the two middle ones when even. Throws on an empty list: a bug of the caller. */
export const median = (values: readonly number[]): number => medianOf(values);

/** Quantile for a share of 0 to 1, straight between order statistics (type 7). Throws on an empty list. */
export const quantile = (values: readonly number[], share: number): number =>
	quantileOf(values, share);
