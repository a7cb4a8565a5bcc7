import type { Node } from './state';
import { apart } from './vec';

/** 1.4826 MAD of successive differences / √2 (method 3), noise holding their running median. */
const SIGMA_OF_DIFFERENCE = 1.4826 / Math.SQRT2;

/** Noise of the worst axis, mG; 0 before it is learned. */
export function sigmaMg(n: Node): number {
	const { noise } = n.fast;
	return SIGMA_OF_DIFFERENCE * Math.max(noise[0], noise[1], noise[2]);
}

/** Readings of a still field lie within a box of this side, mG. */
export function stillMg(n: Node): number {
	return Math.max(n.params.stillMg, n.params.stillSigma * sigmaMg(n));
}

/** Fewer passes say nothing of the highest fiftieth. */
const ENOUGH_PASSES = 20;

const passOnMg = (n: Node): number =>
	n.fast.passN < ENOUGH_PASSES ? 0 : n.params.onPassFactor * n.fast.passMg;

export function onMg(n: Node): number {
	return Math.max(n.params.onMg, n.params.onSigma * sigmaMg(n), passOnMg(n));
}

export const offMg = (n: Node): number => n.params.offRatio * onMg(n);

/** Below this a parked vehicle has gone, mG. */
export function releaseMg(n: Node): number {
	return Math.max(offMg(n), n.params.releaseRatio * n.fast.stayMg);
}

export const disturbanceMg = (n: Node): number => apart(n.fast.last, n.fast.baseline);

/** A silence longer than this hides how the field moved, ms. */
export function gapMs(n: Node): number {
	return 1000 * Math.max(n.params.gapMinS, n.params.gapPeriods * n.member.periodS);
}

/** Running median of |difference|: multiplicative steps, so that it adapts alike at any size. */
const NOISE_STEP = 1.02;
const NOISE_LEAST_MG = 0.05;

export function trackNoise(n: Node, dx: number, dy: number, dz: number): void {
	const { noise } = n.fast;
	noise[0] = Math.max(
		NOISE_LEAST_MG,
		Math.abs(dx) > noise[0] ? noise[0] * NOISE_STEP : noise[0] / NOISE_STEP
	);
	noise[1] = Math.max(
		NOISE_LEAST_MG,
		Math.abs(dy) > noise[1] ? noise[1] * NOISE_STEP : noise[1] / NOISE_STEP
	);
	noise[2] = Math.max(
		NOISE_LEAST_MG,
		Math.abs(dz) > noise[2] ? noise[2] * NOISE_STEP : noise[2] / NOISE_STEP
	);
}
