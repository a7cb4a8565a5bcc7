/**
 * Control charts (NIST/SEMATECH e-Handbook 6.3.2.3 and 6.3.2.4). Own code: no package at hand has them, and
 * both must be resumable from stored state.
 */
export interface EwmaSettings {
	target: number;
	sigma: number;
	lambda: number;
	/** Distance of the limits in standard deviations of the average. */
	limitSigmas: number;
}

/** Next value of an exponentially weighted moving average. */
export const ewmaStep = (average: number, value: number, lambda: number): number =>
	average + lambda * (value - average);

/** Averages for t = 1 … n, starting from the target, with asymptotic limits. */
export function ewmaChart(
	values: readonly number[],
	{ target, sigma, lambda, limitSigmas }: EwmaSettings
): { averages: number[]; lower: number; upper: number } {
	let average = target;
	const averages = values.map((value) => (average = ewmaStep(average, value, lambda)));
	const reach = limitSigmas * sigma * Math.sqrt(lambda / (2 - lambda));
	return { averages, lower: target - reach, upper: target + reach };
}

export interface CusumSettings {
	target: number;
	/** Allowance k and decision limit h, in the values' unit. */
	k: number;
	h: number;
}

export interface CusumState {
	high: number;
	low: number;
}

export const CUSUM_START: CusumState = { high: 0, low: 0 };

/** Two-sided tabular CUSUM: both sums never fall under 0. */
export function cusumStep(
	state: CusumState,
	value: number,
	{ target, k }: Pick<CusumSettings, 'target' | 'k'>
): CusumState {
	return {
		high: Math.max(0, state.high + value - target - k),
		low: Math.max(0, state.low + target - k - value)
	};
}

/** A signal: either sum over h. */
export const cusumSignals = ({ high, low }: CusumState, h: number): boolean => high > h || low > h;

/** The states after each value. */
export function cusumChart(values: readonly number[], settings: CusumSettings): CusumState[] {
	let state = CUSUM_START;
	return values.map((value) => (state = cusumStep(state, value, settings)));
}
