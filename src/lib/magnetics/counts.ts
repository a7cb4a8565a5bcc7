import type { SensorProfile } from './sensor-profile';
import type { Vec3 } from './vector';

const MG_PER_GAUSS = 1000;
/** Method 1: a count this near to either end of the range is clipped. */
export const CLIP_MARGIN_COUNTS = 8;

type Scale = Pick<SensorProfile, 'countsPerGauss'>;
type Span = Pick<SensorProfile, 'bits' | 'nullCount'>;

/** Offset-binary counts `u` (0 … 2^bits - 1) as signed counts around the null field. */
export const signedCounts = (offsetBinary: number, { nullCount }: Span): number =>
	offsetBinary - nullCount;

/** Smallest and largest signed count that a sensor of this profile can produce. */
export function signedRange({ bits, nullCount }: Span): { min: number; max: number } {
	return { min: -nullCount, max: 2 ** bits - 1 - nullCount };
}

/** One axis: signed counts to mG. */
export const axisMg = (counts: number, { countsPerGauss }: Scale): number =>
	(counts * MG_PER_GAUSS) / countsPerGauss;

/** Signed counts of three axes to mG, before polarity and offset (method 2). */
export function countsToMg(counts: Vec3, scale: Scale): Vec3 {
	return [axisMg(counts[0], scale), axisMg(counts[1], scale), axisMg(counts[2], scale)];
}

/** What a converter would put out: rounded to whole counts, held at the ends of its range. */
export function mgToCounts(fieldMg: Vec3, profile: Scale & Span): Vec3 {
	const { min, max } = signedRange(profile);
	const axis = (mg: number) =>
		Math.min(max, Math.max(min, Math.round((mg * profile.countsPerGauss) / MG_PER_GAUSS)));
	return [axis(fieldMg[0]), axis(fieldMg[1]), axis(fieldMg[2])];
}

/** Whether any axis is within 8 counts of either end: steel or a magnet overloads the sensor. */
export function isClipped(counts: Vec3, profile: Span): boolean {
	const { min, max } = signedRange(profile);
	return counts.some((c) => c - min <= CLIP_MARGIN_COUNTS || max - c <= CLIP_MARGIN_COUNTS);
}
