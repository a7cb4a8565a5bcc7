import { quickselect } from 'simple-statistics';
import type { HourSample, Slope, Triple } from './state';

/** Triples need this much of their own temperature movement (method 5.1), °C. */
const LEAST_C = 2;
const LEAST_TRIPLES = 20;
const MAD_TO_SIGMA = 1.4826;
/** √(π/2): a median is that much less steady than a mean. */
const MEDIAN_LOSS = 1.2533;
/** A slope is never known better than this, mG/°C: the board lags behind the air. */
export const LEAST_SE = 0.03;

const MOST_HOURS = 26;
const MOST = (MOST_HOURS * (MOST_HOURS - 1) * (MOST_HOURS - 2)) / 6;
/** Working space, filled anew by each call: thousands of ratios an estimate would keep the collector busy. */
const ratios = [new Float64Array(MOST), new Float64Array(MOST), new Float64Array(MOST)] as const;

/**
 * Slope k per axis, mG/°C: median over triples of hours i < j < k of
 * (B_j - line(B_i, B_k)) / (T_j - line(T_i, T_k)), exact against any drift linear over the day (method 5.1).
 * Hours of one stay, or vacant ones, only among themselves. null with too few triples.
 */
export function slopeOf(hours: readonly HourSample[]): Slope | null {
	let count = 0;
	for (let i = 0; i < hours.length; i++) {
		for (let k = i + 2; k < hours.length; k++) {
			for (let j = i + 1; j < k; j++) {
				if (takeTriple(hours[i], hours[j], hours[k], count)) count++;
			}
		}
	}
	if (count < LEAST_TRIPLES) return null;
	const fits = ratios.map((space) => centre(space, count, hours.length));
	return {
		k: fits.map((f) => f.median) as Triple,
		se: fits.map((f) => f.se) as Triple,
		triples: count
	};
}

function takeTriple(
	a: HourSample | undefined,
	b: HourSample | undefined,
	c: HourSample | undefined,
	at: number
): boolean {
	if (a === undefined || b === undefined || c === undefined) return false;
	if (a[5] !== b[5] || b[5] !== c[5]) return false;
	const w = (b[0] - a[0]) / (c[0] - a[0]);
	const deltaC = b[1] - (a[1] + w * (c[1] - a[1]));
	if (Math.abs(deltaC) < LEAST_C) return false;
	ratios[0][at] = (b[2] - (a[2] + w * (c[2] - a[2]))) / deltaC;
	ratios[1][at] = (b[3] - (a[3] + w * (c[3] - a[3]))) / deltaC;
	ratios[2][at] = (b[4] - (a[4] + w * (c[4] - a[4]))) / deltaC;
	return true;
}

/** Median by selection in place; the library sees an array, which is all it needs. */
function selectMedian(space: Float64Array, count: number): number {
	const mid = count >> 1;
	quickselect(space as unknown as number[], mid, 0, count - 1);
	return space[mid] ?? NaN;
}

/** Median and its standard error; of so many hours about a third are independent in such triples. */
function centre(space: Float64Array, count: number, hours: number): { median: number; se: number } {
	const median = selectMedian(space, count);
	for (let i = 0; i < count; i++) space[i] = Math.abs((space[i] ?? NaN) - median);
	const mad = selectMedian(space, count);
	const se = (MAD_TO_SIGMA * MEDIAN_LOSS * mad) / Math.sqrt(Math.max(1, hours / 3));
	return { median, se: Math.max(se, LEAST_SE) };
}
