/** A field vector in the node's own axes, [x, y, z], z near vertical. Unit as named where used (mG as a rule). */
export type Vec3 = readonly [number, number, number];

export const ZERO: Vec3 = [0, 0, 0];

export const add = (a: Vec3, b: Vec3): Vec3 => [a[0] + b[0], a[1] + b[1], a[2] + b[2]];
export const subtract = (a: Vec3, b: Vec3): Vec3 => [a[0] - b[0], a[1] - b[1], a[2] - b[2]];
export const scale = (a: Vec3, k: number): Vec3 => [a[0] * k, a[1] * k, a[2] * k];
export const dot = (a: Vec3, b: Vec3): number => a[0] * b[0] + a[1] * b[1] + a[2] * b[2];
export const magnitude = (a: Vec3): number => Math.hypot(a[0], a[1], a[2]);
export const cross = (a: Vec3, b: Vec3): Vec3 => [
	a[1] * b[2] - a[2] * b[1],
	a[2] * b[0] - a[0] * b[2],
	a[0] * b[1] - a[1] * b[0]
];

/** Angle between two vectors in degrees; NaN when either is zero. */
export const angleDeg = (a: Vec3, b: Vec3): number =>
	(Math.acos(Math.max(-1, Math.min(1, dot(a, b) / (magnitude(a) * magnitude(b))))) * 180) / Math.PI;
