import { addStorm, recordedSeries, type GeomagneticSeries } from './geomagnetic';
import { random } from './random';
import type { Scenario } from './scenarios/types';
import type { Facts, Truth } from './truth';

const DAY_MS = 86_400_000;

/** The recorded variation, and storms where the scenario wants them. */
export function weatherOfSpace(scenario: Scenario, seed: number, truth: Truth): GeomagneticSeries {
	const minutes = scenario.days * 1440 + 2;
	const series = recordedSeries(truth.fromMs, minutes);
	const { storms } = scenario;
	if (storms.perWeek <= 0) return series;
	const rng = random(seed, 'storms');
	const before = { ...series, north: series.north.slice(), east: series.east.slice() };
	let atMs = truth.judgedFromMs + rng.between(1, 8) * 3_600_000;
	while (atMs < truth.toMs) {
		const durationMs = rng.between(8, 20) * 3_600_000;
		const { peakMg, stepMg } = storms;
		addStorm(series, { fromMs: atMs, durationMs, peakMg, stepMg, steps: rng.whole(3, 7) }, rng);
		atMs += durationMs + rng.exponential((7 * DAY_MS) / storms.perWeek);
	}
	noteStorm(truth.facts, series, before);
	return series;
}

function noteStorm(facts: Facts, series: GeomagneticSeries, before: GeomagneticSeries): void {
	for (let i = 1; i < series.north.length; i++) {
		const north = series.north[i]! - before.north[i]!;
		const east = series.east[i]! - before.east[i]!;
		facts.stormPeakMg = Math.max(facts.stormPeakMg, Math.hypot(north, east));
		const step = Math.hypot(
			series.north[i]! - series.north[i - 1]!,
			series.east[i]! - series.east[i - 1]!
		);
		facts.stormStepMg = Math.max(facts.stormStepMg, step);
	}
}
