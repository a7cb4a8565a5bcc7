import { magnitude, subtract, type Vec3 } from '$lib/magnetics/vector';
import type { PublishedChange, PublishedDetector, PublishedMethod, PublishedRow } from './method';

/**
 * Normalized cross-correlation (J. Sensors 2015, doi 10.1155/2015/361242): the recent signal against a
 * reference, its centre found by k-means; where the coefficient passes a threshold a pulse says that a
 * vehicle came or went. The abstract alone could be read, so window and thresholds are our own: 40
 * samples of half a second, two clusters of the distances from the quiet field while it is busy.
 */
const STEP_MS = 500;
const WINDOW = 40;
const COEFFICIENT = 0.6;
const LEAST_RISE_MG = 20;
const CLUSTER_EVENTS = 60;
/** Small vehicles end far below the mean of all: nearer to 'free' than half way still counts as taken. */
const NEARER = 0.25;

/** The shape of an arrival with its middle at each lag of the window: quiet, a ramp of three seconds, level. */
const ARRIVALS = Array.from({ length: WINDOW - 16 }, (_, lag) =>
	Array.from({ length: WINDOW }, (__, i) => Math.min(1, Math.max(0, (i - 5 - lag) / 6)))
);

export function normalizedCorrelation(a: readonly number[], b: readonly number[]): number {
	const mean = (v: readonly number[]) => v.reduce((sum, x) => sum + x, 0) / v.length;
	const [ma, mb] = [mean(a), mean(b)];
	let [ab, aa, bb] = [0, 0, 0];
	for (let i = 0; i < a.length; i++) {
		const [da, db] = [a[i]! - ma, b[i]! - mb];
		ab += da * db;
		aa += da * da;
		bb += db * db;
	}
	return aa > 0 && bb > 0 ? ab / Math.sqrt(aa * bb) : 0;
}

/** Two means in one dimension (Lloyd's steps from the extremes). */
export function twoMeans(values: readonly number[]): [number, number] {
	let [low, high] = [Math.min(...values), Math.max(...values)];
	for (let round = 0; round < 20; round++) {
		const near = values.filter((v) => Math.abs(v - low) <= Math.abs(v - high));
		const far = values.filter((v) => Math.abs(v - low) > Math.abs(v - high));
		if (near.length === 0 || far.length === 0) break;
		const mean = (v: readonly number[]) => v.reduce((sum, x) => sum + x, 0) / v.length;
		[low, high] = [mean(near), mean(far)];
	}
	return [low, high];
}

class CrossCorrelation implements PublishedDetector {
	readonly #quiet: Vec3;
	#window: number[] = [];
	#lastMs = 0;
	#last = 0;
	#taken = false;
	/** Distances seen after changes; their two means part taken from free. */
	#levels: number[] = [0, 100];

	constructor(quietMg: Vec3) {
		this.#quiet = quietMg;
	}

	take(row: PublishedRow): PublishedChange | null {
		const d = magnitude(subtract(row.fieldMg, this.#quiet));
		this.#resample(row.atMs, d);
		if (this.#window.length < WINDOW) return null;
		const rise = this.#window[WINDOW - 1]! - this.#window[0]!;
		if (Math.abs(rise) < LEAST_RISE_MG) return null;
		const sign = Math.sign(rise);
		const best = Math.max(
			...ARRIVALS.map((shape) => sign * normalizedCorrelation(this.#window, shape))
		);
		if (best < COEFFICIENT) return null;
		// k-means parts the levels of free and taken; a pulse must end nearer to the one it leads to.
		const [free, taken] = twoMeans(this.#levels);
		const nearTaken = d > free + (taken - free) * NEARER;
		if (rise > 0 === this.#taken || nearTaken === this.#taken) return null;
		this.#taken = rise > 0;
		this.#levels = [...this.#levels.slice(-CLUSTER_EVENTS), this.#window[0]!, d];
		return { type: rise > 0 ? 'arrival' : 'departure', atMs: row.atMs };
	}

	/** Holds the last value between readings: the method wants an even rate. */
	#resample(atMs: number, d: number): void {
		const steps =
			this.#lastMs === 0 ? 1 : Math.min(WINDOW, Math.round((atMs - this.#lastMs) / STEP_MS));
		for (let i = 1; i < steps; i++) this.#window.push(this.#last);
		this.#window.push(d);
		this.#window = this.#window.slice(-WINDOW);
		this.#lastMs = atMs;
		this.#last = d;
	}
}

export const crossCorrelation: PublishedMethod = {
	name: 'normalized cross-correlation',
	source: 'J. Sensors 2015, doi 10.1155/2015/361242',
	start: (quietMg) => new CrossCorrelation(quietMg)
};
