import { cross, dot, magnitude, scale, add, type Vec3 } from '$lib/magnetics/vector';

/**
 * A node's heading-free frame (method 5.2): ĥ along the horizontal part of its own quiet field, ẑ its
 * vertical, ê = ẑ × ĥ. All nodes of a site see geomagnetic change alike in it, whichever way they lie.
 * Housings within 10° of level.
 */
export interface Frame {
	h: Vec3;
	e: Vec3;
	z: Vec3;
}

const UP: Vec3 = [0, 0, 1];

/** Null where the quiet field has no horizontal part to speak of (near a magnetic pole, or over steel). */
export function frameOf(quietMg: Vec3, leastHorizontalMg = 20): Frame | null {
	const flat: Vec3 = [quietMg[0], quietMg[1], 0];
	const length = magnitude(flat);
	if (length < leastHorizontalMg) return null;
	const h = scale(flat, 1 / length);
	return { h, e: cross(UP, h), z: UP };
}

/** From node axes to (h, e, z). */
export const intoFrame = (frame: Frame, v: Vec3): Vec3 => [
	dot(v, frame.h),
	dot(v, frame.e),
	dot(v, frame.z)
];

/** From (h, e, z) to node axes. */
export const outOfFrame = (frame: Frame, v: Vec3): Vec3 =>
	add(add(scale(frame.h, v[0]), scale(frame.e, v[1])), scale(frame.z, v[2]));
