import { generate, type Generated } from '../../../simulator/generate';
import type { GeomagneticSeries } from '../../../simulator/geomagnetic';
import type { Scenario } from '../../../simulator/scenarios/types';
import { weatherOfSpace } from '../../../simulator/space-weather';
import type { Facts } from '../../../simulator/truth';
import { gradePublished } from '../published/run';
import { judgeLooks, type JudgedLooks } from './confidence';
import { detect, type DetectOptions } from './detect';
import { grade, type Score } from './grade';
import { serverTimes } from './server-times';

/** One scenario with one seed: invented, detected, graded. */
export interface Round {
	scenario: Scenario;
	seed: number;
	score: Score;
	judged: JudgedLooks;
	/** By place in PUBLISHED; empty when not asked for. */
	published: Score[];
	facts: Facts;
	/** Bay codes, so that misses can be named. */
	bays: string[];
	/** Rows that detection took, and rows that came through once each and may move a state. */
	rows: number;
	rowsHeard: number;
	generateMs: number;
	detectMs: number;
	voided: number;
	fastBytes: number;
	slowBytes: number;
	pulsesRefused: Map<string, number>;
}

export interface RoundOptions extends DetectOptions {
	published?: 'with';
	/** Tells the detector the site's true variation hour by hour. */
	withSiteLine?: boolean;
}

/** The same series that the scenario was invented with: it hangs on scenario, seed and times alone. */
function variationOf({ scenario, truth }: Generated, seed: number): GeomagneticSeries {
	return weatherOfSpace(scenario, seed, { ...truth, facts: { ...truth.facts } });
}

export function runRound(scenario: Scenario, seed: number, options: RoundOptions = {}): Round {
	const startedAt = performance.now();
	const generated = generate(scenario, seed);
	const generateMs = performance.now() - startedAt;
	const siteLine = options.withSiteLine === true ? variationOf(generated, seed) : undefined;
	const detected = detect(generated, { ...options, siteLine });
	const { rows, detectMs, voided, fastBytes, slowBytes, pulsesRefused } = detected;
	return {
		scenario,
		seed,
		score: grade(generated, detected),
		judged: judgeLooks(generated, detected, `${scenario.name} ${seed}`),
		published: options.published === undefined ? [] : gradePublished(generated),
		facts: generated.truth.facts,
		bays: generated.plan.bays.map(({ code }) => code),
		rows,
		rowsHeard: rowsHeard(generated),
		generateMs,
		detectMs,
		voided,
		fastBytes,
		slowBytes,
		pulsesRefused
	};
}

function rowsHeard(generated: Generated): number {
	return generated.logs.reduce((sum, log, nodeIndex) => {
		const times = serverTimes(generated, nodeIndex);
		const counts = log.rowCount.values;
		return sum + times.reduce((rows, ms, m) => rows + (Number.isNaN(ms) ? 0 : counts[m]!), 0);
	}, 0);
}
