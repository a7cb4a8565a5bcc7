import { offMg, sigmaMg } from './thresholds';
import type { Node, Triple } from './state';
import { apart, type Axes } from './vec';

/** Without a slope the reference is believed only this near its own temperature, °C. */
const NEAR_TEMP_C = 5;

/**
 * The accepted reference as it would read now: offset in use and temperature taken in (method 2, 3).
 * null when there is none or its temperature is too far off to say.
 */
export function referenceNow(n: Node): Triple | null {
	const { reference, offset, slope, signs } = n.slow;
	if (reference === null) return null;
	const now: Triple = [...reference.fieldMg];
	const deltaC = n.fast.tempC - (reference.tempC ?? NaN);
	for (let i = 0; i < 3; i++) {
		const was = reference.offsetMg?.[i as 0] ?? 0;
		now[i as 0] += n.fast.polarity * signs[i as 0] * (was - (offset?.[i as 0] ?? 0));
		if (slope !== null && !Number.isNaN(deltaC)) now[i as 0] += slope.k[i as 0] * deltaC;
	}
	if (slope === null && Math.abs(deltaC) > NEAR_TEMP_C) return null;
	return now;
}

/** Distance of a level from the reference as of now, mG; infinite where it cannot be said. */
export function fromReferenceMg(n: Node, level: Axes): number {
	const now = referenceNow(n);
	return now === null ? Infinity : apart(level, now);
}

export const atReference = (n: Node, level: Axes): boolean => fromReferenceMg(n, level) <= offMg(n);

/** What temperature can have moved since the baseline stood, 2 standard errors over three axes, mG. */
export function unexplainedByTempMg(n: Node, sinceTempC: number): number {
	const deltaC = Math.abs(n.fast.tempC - sinceTempC);
	if (Number.isNaN(deltaC)) return 0;
	const { slope } = n.slow;
	const prior = n.params.slopePriorMgPerC;
	const se = slope === null ? Math.hypot(prior, prior, prior) : Math.hypot(...slope.se);
	return 2 * se * deltaC + 2 * sigmaMg(n);
}
