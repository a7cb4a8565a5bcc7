import type { Counts3 } from '$lib/wire/types';
import { ageFilm, bridgeMg, magnetFieldMg, toCounts } from './film';
import { lookAt } from './node-field';
import type { NodeState } from './node-state';
import { temperatureC } from './temperature';

/** The housing's temperature sensor has its own noise and reads in tenths. */
const TEMP_NOISE_C = 0.15;
/** A magnet's field leans off the vertical by these shares. */
const MAGNET_LEAN = [0.3, -0.2, 1] as const;

/**
 * One measurement at a time: the true field through film, bridge, noise and converter, signed counts;
 * `samples` are averaged. The temperature read along with it is left in `node.tempDc`.
 */
export function sample(node: NodeState, atMs: number, samples = 1): Counts3 {
	const { config, film, rng, field } = node;
	const { sensor } = config;
	ageFilm(film, atMs);
	lookAt(field, atMs);
	const magnetMg = magnetFieldMg(film, atMs);
	if (magnetMg !== 0) {
		for (let axis = 0; axis < 3; axis++) field.now[axis]! += magnetMg * MAGNET_LEAN[axis]!;
	}
	const tempC = temperatureC(config.course, atMs);
	const sigma = samples === 1 ? sensor.noiseMg : sensor.noiseMg / Math.sqrt(samples);
	node.tempDc = Math.round((tempC + TEMP_NOISE_C * rng.normal()) * 10);
	return [
		toCounts(sensor, bridgeMg(sensor, film, field.now, tempC, 0) + sigma * rng.normal()),
		toCounts(sensor, bridgeMg(sensor, film, field.now, tempC, 1) + sigma * rng.normal()),
		toCounts(sensor, bridgeMg(sensor, film, field.now, tempC, 2) + sigma * rng.normal())
	];
}

/** How far two measurements lie apart, mG. */
export function apartMg(node: NodeState, a: Counts3, b: Counts3): number {
	const [x, y, z] = [a[0] - b[0], a[1] - b[1], a[2] - b[2]];
	return (Math.sqrt(x * x + y * y + z * z) * 1000) / node.config.sensor.countsPerGauss;
}
