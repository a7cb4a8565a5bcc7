/** Three float32 in place: state that survives storage bit for bit and costs no allocation a row. */
export interface V3 {
	0: number;
	1: number;
	2: number;
	readonly length: number;
}

/** Anything that can be read as three axes. */
export type Axes = Readonly<{ 0: number; 1: number; 2: number }>;

/** A view of three floats in a buffer; Float32Array has no fixed indices in its type, hence the cast. */
export const view3 = (buffer: Float32Array, at: number): V3 =>
	buffer.subarray(at, at + 3) as unknown as V3;

export const v3 = (): V3 => new Float32Array(3) as unknown as V3;

export function set3(to: V3, from: Axes): void {
	to[0] = from[0];
	to[1] = from[1];
	to[2] = from[2];
}

export function shift3(to: V3, by: Axes, k = 1): void {
	to[0] += k * by[0];
	to[1] += k * by[1];
	to[2] += k * by[2];
}

export const size3 = (a: Axes): number => Math.sqrt(a[0] * a[0] + a[1] * a[1] + a[2] * a[2]);

export function apart(a: Axes, b: Axes): number {
	const x = a[0] - b[0];
	const y = a[1] - b[1];
	const z = a[2] - b[2];
	return Math.sqrt(x * x + y * y + z * z);
}

/** Largest difference on one axis. */
export function axisApart(a: Axes, b: Axes): number {
	return Math.max(Math.abs(a[0] - b[0]), Math.abs(a[1] - b[1]), Math.abs(a[2] - b[2]));
}

/** |a + b|. */
export const sumSize = (a: Axes, b: Axes): number =>
	Math.hypot(a[0] + b[0], a[1] + b[1], a[2] + b[2]);
