import { magnitude, subtract, type Vec3 } from '$lib/magnetics/vector';
import type { DriftReference, HourRecord } from './types';

/** Method 4, 'Inverted film': each axis is a bridge of its own; a smaller component tells no sign. */
const LEAST_AXIS_MG = 50;
/** Back within the usual off threshold, or a tenth of the field. */
const WITHIN_MG = 24.5;
const WITHIN_SHARE = 0.1;

const EITHER = [1, -1] as const;
const SIGNS: readonly Vec3[] = EITHER.flatMap((x) =>
	EITHER.flatMap((y) => EITHER.map((z): Vec3 => [x, y, z]))
).slice(1);

/**
 * An hour of the empty bay whose film had flipped, on some axes or all, read with the signs that bring it back to
 * the reference: a flipped film is no drift of a thousand mG, it is told by its own condition. Any other hour comes
 * back as it is.
 */
export function unflipped(hour: HourRecord, reference: DriftReference): HourRecord {
	if (hour.stay !== null || reference.offsetMg === null) return hour;
	const ref = reference.fieldMg;
	const within = Math.max(WITHIN_MG, WITHIN_SHARE * magnitude(ref));
	if (magnitude(subtract(hour.fieldMg, ref)) <= 2 * within) return hour;
	const back = SIGNS.filter((signs) => signs.every((s, i) => s > 0 || tells(ref, i)))
		.map((signs) => mirrored(hour.fieldMg, signs))
		.sort((a, b) => magnitude(subtract(a, ref)) - magnitude(subtract(b, ref)))[0];
	if (back === undefined || magnitude(subtract(back, ref)) > within) return hour;
	return { ...hour, fieldMg: back };
}

const tells = (ref: Vec3, axis: number): boolean => Math.abs(ref[axis] ?? 0) > LEAST_AXIS_MG;
const mirrored = (v: Vec3, s: Vec3): Vec3 => [v[0] * s[0], v[1] * s[1], v[2] * s[2]];
