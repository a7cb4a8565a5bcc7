import { medianAbsoluteDeviation } from 'simple-statistics';

/** Makes a MAD of normal values their standard deviation: 1 / Φ⁻¹(3/4). */
export const MAD_TO_SIGMA = 1.4826;

/** Median absolute deviation from the median. Throws on an empty list. */
export const mad = (values: readonly number[]): number => medianAbsoluteDeviation(values);

/** Spread that outliers do not move: 1.4826 MAD, the standard deviation where values are normal. */
export const robustSigma = (values: readonly number[]): number => MAD_TO_SIGMA * mad(values);

/**
 * Noise of a series that may drift: 1.4826 MAD of successive differences over √2 (method.md 3). Null under
 * two values.
 */
export function differenceSigma(values: readonly number[]): number | null {
	if (values.length < 2) return null;
	const differences: number[] = [];
	for (let i = 1; i < values.length; i++)
		differences.push((values[i] as number) - (values[i - 1] as number));
	return robustSigma(differences) / Math.SQRT2;
}
