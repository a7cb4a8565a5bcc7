import { describe, expect, test } from 'vitest';
import { scenarioByName } from '../../simulator/scenarios/lines';
import { figuresOf } from './support/grade';
import {
	detailLines,
	FAST_BYTES,
	missLines,
	rightShare,
	scoreLine,
	SLOW_BYTES
} from './support/report';
import { runRound } from './support/round';
import { LINE_TARGETS, SHORT_TARGETS, type Target } from './targets';

/** LODEKEEP_ACCURACY=long judges every line of method.md 11 over its full days; a seed may be given. */
const long = process.env['LODEKEEP_ACCURACY'] === 'long';
const seed = Number(process.env['LODEKEEP_ACCURACY_SEED'] ?? 7);
const TIMEOUT_MS = 600_000;
const SHOWN_MISSES = 12;

const targets: readonly Target[] = long ? [...SHORT_TARGETS, ...LINE_TARGETS] : SHORT_TARGETS;

describe.each(targets)(
	'scenario $scenario',
	(target) => {
		const scenario = scenarioByName(target.scenario)!;
		const days = long ? scenario.days : target.shortDays;
		const round = runRound({ ...scenario, days }, seed);
		const { score, facts } = round;
		console.log(
			[
				scoreLine(target.scenario, score),
				...detailLines(round),
				...missLines(round, SHOWN_MISSES)
			].join('\n')
		);

		test('holds the hard cases that it stands for, and enough events', () => {
			const held = target.holds(facts);
			expect(held).toEqual(Object.fromEntries(Object.keys(held).map((name) => [name, true])));
			expect(score.truths).toBeGreaterThan(target.eventsPerDay * days);
		});

		test('gave detection every row that came through, each once', () => {
			expect(round.rowsHeard).toBeGreaterThan(0);
			expect(round.rows).toBe(round.rowsHeard);
		});

		test(`finds arrivals and departures with F1 of at least ${target.f1}`, () => {
			expect(figuresOf(score).f1).toBeGreaterThanOrEqual(target.f1);
		});

		test(`is in the right state ${100 * target.right} % of the time`, () => {
			expect(rightShare(score)).toBeGreaterThanOrEqual(target.right);
		});

		test('keeps state that fits its columns', () => {
			expect(round.fastBytes).toBeLessThanOrEqual(FAST_BYTES);
			expect(round.slowBytes).toBeLessThanOrEqual(SLOW_BYTES);
		});
	},
	TIMEOUT_MS
);
