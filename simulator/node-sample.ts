import type { Vec3 } from '$lib/magnetics/vector';
import type { Counts3 } from '$lib/wire/types';
import { ageFilm, bridgeMg, magnetFieldMg, toCounts } from './film';
import { fieldMg } from './node-field';
import type { NodeState } from './node-state';
import { temperatureC } from './temperature';

/** The housing's temperature sensor is off by its own tenth and reads in tenths. */
const TEMP_NOISE_C = 0.15;

export interface Sample {
	rawMg: Vec3;
	counts: Counts3;
	tempDc: number;
}

/** One measurement at a time: the true field through film, bridge, noise and converter; `samples` are averaged. */
export function sample(node: NodeState, atMs: number, samples = 1): Sample {
	const { config, film, rng } = node;
	const { sensor } = config;
	ageFilm(film, atMs);
	const tempC = temperatureC(config.course, atMs);
	const quiet = fieldMg(node.field, atMs);
	const magnet = magnetFieldMg(film, atMs);
	const field: Vec3 =
		magnet === 0 ? quiet : [quiet[0] + 0.3 * magnet, quiet[1] - 0.2 * magnet, quiet[2] + magnet];
	const clean = bridgeMg(sensor, film, field, tempC);
	const sigma = sensor.noiseMg / Math.sqrt(samples);
	const counts: Counts3 = [
		toCounts(sensor, clean[0] + sigma * rng.normal()),
		toCounts(sensor, clean[1] + sigma * rng.normal()),
		toCounts(sensor, clean[2] + sigma * rng.normal())
	];
	const perCount = 1000 / sensor.countsPerGauss;
	return {
		rawMg: [counts[0] * perCount, counts[1] * perCount, counts[2] * perCount],
		counts,
		tempDc: Math.round((tempC + TEMP_NOISE_C * rng.normal()) * 10)
	};
}
