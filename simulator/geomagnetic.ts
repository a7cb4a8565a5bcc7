import { readFileSync } from 'node:fs';
import { gunzipSync } from 'node:zlib';
import type { Vec3 } from '$lib/magnetics/vector';
import type { Random } from './random';

/** Departure of the Earth's field from its mean, one value a minute: H (magnetic north), E, Z (down), mG. */
export interface GeomagneticSeries {
	startMs: number;
	north: Float64Array;
	east: Float64Array;
	down: Float64Array;
}

const RECORDED = new URL('./fixtures/geomagnetic/BOU20160101-21vmin.min.gz', import.meta.url);
const NT_PER_MG = 100;
const MINUTE_MS = 60_000;
/** IAGA-2002 writes 99999.00 (missing) and 88888.00 (not recorded). */
const MISSING_NT = 88_888;

let recorded: Vec3[] | null = null;

/** IAGA-2002 text → departures from the mean, mG; a missing minute repeats the one before. */
export function parseIaga(text: string): Vec3[] {
	const values: Vec3[] = [];
	for (const line of text.split('\n')) {
		if (!/^\d{4}-/.test(line)) continue;
		const [h, e, z] = line.trim().split(/\s+/).slice(3, 6).map(Number);
		if (h === undefined || e === undefined || z === undefined) continue;
		const last = values[values.length - 1];
		if (Math.max(h, e, z) < MISSING_NT) values.push([h, e, z]);
		else if (last !== undefined) values.push(last);
	}
	const mean = [0, 1, 2].map((axis) => values.reduce((s, v) => s + v[axis]!, 0) / values.length);
	return values.map((v): Vec3 => [
		(v[0] - mean[0]!) / NT_PER_MG,
		(v[1] - mean[1]!) / NT_PER_MG,
		(v[2] - mean[2]!) / NT_PER_MG
	]);
}

function recordedMinutes(): Vec3[] {
	recorded ??= parseIaga(gunzipSync(readFileSync(RECORDED)).toString('latin1'));
	return recorded;
}

/** The recording played forwards and backwards by turns, so that it has no seam. */
export function recordedSeries(startMs: number, minutes: number): GeomagneticSeries {
	const source = recordedMinutes();
	const series = {
		startMs,
		north: new Float64Array(minutes),
		east: new Float64Array(minutes),
		down: new Float64Array(minutes)
	};
	const firstMinute = Math.floor(startMs / MINUTE_MS);
	for (let i = 0; i < minutes; i++) {
		const turn = (firstMinute + i) % (2 * source.length);
		const [h, e, z] = source[turn < source.length ? turn : 2 * source.length - 1 - turn]!;
		[series.north[i], series.east[i], series.down[i]] = [h, e, z];
	}
	return series;
}

export interface Storm {
	fromMs: number;
	durationMs: number;
	/** Largest horizontal departure, mG. */
	peakMg: number;
	/** Steps of a minute, each of this size at most, mG. */
	stepMg: number;
	steps: number;
}

/** Adds a storm, mainly horizontal: sudden steps within a minute that decay over hours, and slow waves. */
export function addStorm(series: GeomagneticSeries, storm: Storm, rng: Random): void {
	const first = Math.max(0, Math.floor((storm.fromMs - series.startMs) / MINUTE_MS));
	const minutes = Math.floor(storm.durationMs / MINUTE_MS);
	const shape = Array.from({ length: minutes }, () => [0, 0] as [number, number]);
	for (let k = 0; k < storm.steps; k++) {
		const at = Math.floor(minutes * rng.between(0.02, 0.75));
		const azimuth = rng.between(0, 2 * Math.PI);
		const size = storm.stepMg * (k === 0 ? 1 : rng.between(0.3, 1));
		const decayMin = rng.between(40, 240);
		for (let i = at; i < minutes; i++) {
			const value = size * Math.exp(-(i - at) / decayMin);
			shape[i]![0] += value * Math.cos(azimuth);
			shape[i]![1] += value * Math.sin(azimuth);
		}
	}
	const wave = [rng.between(20, 60), rng.between(90, 200)];
	const main = Math.max(0, storm.peakMg - storm.stepMg);
	for (let i = 0; i < minutes; i++) {
		const swell = Math.sin((Math.PI * i) / minutes);
		const ripple = Math.sin(i / wave[0]!) * 0.2 + Math.sin(i / wave[1]!) * 0.15;
		shape[i]![0] -= main * swell * (0.75 + ripple);
		shape[i]![1] += main * swell * ripple * 0.6;
	}
	const peak = Math.max(...shape.map(([n, e]) => Math.hypot(n, e)));
	// Scaled down to the wanted peak, never up: that would raise the steps past their size.
	const factor = Math.min(1, storm.peakMg / peak);
	for (let i = 0; i < minutes && first + i < series.north.length; i++) {
		const [n, e] = shape[i]!;
		series.north[first + i]! += n * factor;
		series.east[first + i]! += e * factor;
		series.down[first + i]! += (n - e) * factor * 0.15;
	}
}

/** Adds the value at a time to `sum`, straight between minutes; the ends hold. */
export function addVariation(
	series: GeomagneticSeries,
	atMs: number,
	sum: [number, number, number]
): void {
	const { north, east, down } = series;
	const position = (atMs - series.startMs) / MINUTE_MS;
	const last = north.length - 1;
	const i = Math.min(last, Math.max(0, Math.floor(position)));
	const j = Math.min(last, i + 1);
	const share = Math.min(1, Math.max(0, position - i));
	sum[0] += north[i]! + (north[j]! - north[i]!) * share;
	sum[1] += east[i]! + (east[j]! - east[i]!) * share;
	sum[2] += down[i]! + (down[j]! - down[i]!) * share;
}
