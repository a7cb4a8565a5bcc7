import { describe, expect, test } from 'vitest';
import { gaussian, seeded } from '$lib/numeric/random';
import { magnitude, ZERO, type Vec3 } from '$lib/magnetics/vector';
import { namedCause, sureMagnitude, writeFilmBack } from './decompose';
import { driftSettings } from './params';
import type { HourParts } from './types';
import { daysToLimit, daysUntil, ewmaForPeople, rateOf } from './rate';
import {
	ownResidual,
	WATCH_START,
	watchHour,
	watchPair,
	type DayRecord,
	type WatchState
} from './watch';

const SETTINGS = driftSettings();
const HOUR_MS = 3_600_000;
const DAY_MS = 24 * HOUR_MS;

function parts(h: number, unexplainedMg: Vec3, more: Partial<HourParts> = {}): HourParts {
	return {
		hourMs: h * HOUR_MS,
		tempC: 20,
		totalMg: unexplainedMg,
		temperatureMg: ZERO,
		geomagneticMg: ZERO,
		bridgeMg: ZERO,
		filmMg: ZERO,
		surroundingsMg: ZERO,
		unexplainedMg,
		errorMg: [0.1, 0.1, 0.1],
		notes: [],
		...more
	};
}
const run = (from: WatchState, hours: readonly HourParts[]): WatchState =>
	hours.reduce((state, hour) => watchHour(state, hour, SETTINGS), from);
const hoursOf = (from: number, n: number, of: (h: number) => Vec3) =>
	Array.from({ length: n }, (_, i) => parts(from + i, of(from + i)));

describe('a limit', () => {
	test('is passed only when the value less 2 standard errors passes it (method 2)', () => {
		expect(sureMagnitude([15, 0, 0], [3, 9, 9])).toBeCloseTo(9, 12);
		expect(sureMagnitude([1, 0, 0], [3, 9, 9])).toBe(0);
		expect(sureMagnitude(ZERO, [3, 9, 9])).toBe(0);
	});
});

describe('drifting by level', () => {
	test('10 mG in 2 hours running, not in one', () => {
		const one = run(
			WATCH_START,
			hoursOf(0, 1, () => [12, 0, 0])
		);
		expect(one.driftingSinceMs).toBeNull();
		const two = run(
			one,
			hoursOf(1, 1, () => [12, 0, 0])
		);
		expect(two).toMatchObject({ driftingSinceMs: 0, driftingBy: 'level' });
	});

	test('two hours with a calm one between are not running', () => {
		const state = run(WATCH_START, [
			parts(0, [12, 0, 0]),
			parts(1, [3, 0, 0]),
			parts(2, [12, 0, 0])
		]);
		expect(state.driftingSinceMs).toBeNull();
	});

	test('it ends after two calm hours', () => {
		const drifting = run(
			WATCH_START,
			hoursOf(0, 3, () => [12, 0, 0])
		);
		expect(
			run(
				drifting,
				hoursOf(3, 1, () => ZERO)
			).driftingSinceMs
		).toBe(0);
		expect(
			run(
				drifting,
				hoursOf(3, 2, () => ZERO)
			).driftingSinceMs
		).toBeNull();
	});

	test('an hour that cannot be judged neither counts nor breaks the run', () => {
		const state = run(WATCH_START, [
			parts(0, [12, 0, 0]),
			parts(1, [90, 0, 0], { errorMg: null }),
			parts(2, [12, 0, 0])
		]);
		expect(state.driftingSinceMs).toBe(0);
	});

	test('hours at the refresh limit are counted with their beginning', () => {
		const state = run(
			WATCH_START,
			hoursOf(5, 6, () => [0, 17, 0])
		);
		expect(state).toMatchObject({ refreshHours: 6, refreshBeganMs: 5 * HOUR_MS });
	});
});

describe('drifting by CUSUM on daily medians', () => {
	const random = seeded(3);
	const noisy = (shift: Vec3) => (): Vec3 => [
		shift[0] + gaussian(random),
		shift[1] + gaussian(random),
		shift[2] + gaussian(random)
	];
	const calm = run(WATCH_START, hoursOf(0, 20 * 24, noisy(ZERO)));

	test('a shift of 5 mG, under the level, is seen within a week', () => {
		const state = run(calm, hoursOf(20 * 24, 7 * 24, noisy([0, -5, 0])));
		expect(state.driftingBy).toBe('cusum');
	});

	test('zero is where the first 14 days stood, not 0', () => {
		const off = run(WATCH_START, hoursOf(0, 60 * 24, noisy([6, 0, 0])));
		expect(off.driftingSinceMs).toBeNull();
		expect(off.centre!.zeroMg![0]).toBeCloseTo(6, 0);
	});

	test('a pair re-zeroes: sums, runs and drifting start anew', () => {
		const drifting = run(calm, hoursOf(20 * 24, 7 * 24, noisy([0, -5, 0])));
		const after = watchPair(drifting, 'nothing');
		expect(after.driftingSinceMs).toBeNull();
		expect(after.centre!.zeroMg).toBeNull();
		expect(run(after, hoursOf(27 * 24, 10 * 24, noisy(ZERO))).driftingSinceMs).toBeNull();
	});

	test('after a pair zero is where the first three days stand', () => {
		const after = run(watchPair(calm, 'nothing'), hoursOf(20 * 24, 20 * 24, noisy([2.5, 0, 0])));
		expect(after.centre!.zeroMg![0]).toBeCloseTo(2.5, 0);
		expect(after.driftingSinceMs).toBeNull();
	});

	test('a node’s own residual is the median of its last week since the pair', () => {
		const off = run(
			WATCH_START,
			hoursOf(0, 10 * 24, () => [4, 0, 0])
		);
		expect(ownResidual(off)).toEqual([4, 0, 0]);
		expect(ownResidual(watchPair(off, 'nothing'))).toEqual(ZERO);
	});

	test('what is remembered is bounded', () => {
		const state = run(WATCH_START, hoursOf(0, 200 * 24, noisy(ZERO)));
		expect(state.days.length).toBeLessThanOrEqual(60);
		expect(state.today!.unexplained.length).toBeLessThanOrEqual(24);
	});
});

const day = (i: number, movementMg: Vec3, run_ = 0): DayRecord => ({
	dayMs: i * DAY_MS,
	unexplainedMg: movementMg,
	movementMg,
	hours: 20,
	segment: 0,
	run: run_
});

describe('rate and days to limit', () => {
	const random = seeded(17);
	const falling = Array.from({ length: 20 }, (_, i) =>
		day(i, [-0.5 * i + 0.2 * gaussian(random), 0.2 * gaussian(random), 0])
	);

	test('half a milligauss a day is found, within its limits', () => {
		const rate = rateOf(falling, SETTINGS)!;
		expect(rate.mgPerDay[0]).toBeCloseTo(-0.5, 1);
		expect(rate.lowMgPerDay[0]).toBeLessThan(-0.5);
		expect(rate.highMgPerDay[0]).toBeGreaterThan(-0.5);
		expect(rate).toMatchObject({ trend: true, days: 14 });
	});

	test('a film healed begins a new run', () => {
		const healed = [...falling, ...Array.from({ length: 6 }, (_, i) => day(20 + i, ZERO, 1))];
		expect(rateOf(healed, SETTINGS)).toMatchObject({ trend: false, days: 6 });
	});

	test('under 5 days there is no rate', () => {
		expect(rateOf(falling.slice(0, 4), SETTINGS)).toBeNull();
		expect(rateOf([], SETTINGS)).toBeNull();
	});

	// Hand: from 6 mG along x at 0.5 mG/day to 10 mG: 8 days; square to it: sqrt(100 - 36) / 0.5 = 16 days.
	test('the vector decides how far the limit is', () => {
		expect(daysUntil([6, 0, 0], [0.5, 0, 0], 10)).toBeCloseTo(8, 9);
		expect(daysUntil([6, 0, 0], [0, 0.5, 0], 10)).toBeCloseTo(16, 9);
		expect(daysUntil([6, 0, 0], [-0.5, 0, 0], 10)).toBeCloseTo(32, 9);
		expect(daysUntil([6, 0, 0], ZERO, 10)).toBeNull();
		expect(daysUntil([12, 0, 0], ZERO, 10)).toBe(0);
	});

	test('days come as a range to the next limit ahead', () => {
		const rate = rateOf(falling, SETTINGS)!;
		const near = daysToLimit([-8, 0, 0], rate, SETTINGS)!;
		expect(near.limitMg).toBe(10);
		expect(near.from).toBeLessThan(4);
		expect(near.to!).toBeGreaterThan(4);
		expect(daysToLimit([-12, 0, 0], rate, SETTINGS)!.limitMg).toBe(16);
		expect(daysToLimit([-17, 0, 0], rate, SETTINGS)).toBeNull();
		expect(daysToLimit([-8, 0, 0], null, SETTINGS)).toBeNull();
	});

	test('the chart for people starts at the first fortnight and shows a shift', () => {
		const days = Array.from({ length: 40 }, (_, i) => day(i, [i % 2, i > 25 ? 9 : i % 3, 0]));
		const chart = ewmaForPeople(days, 1, SETTINGS)!;
		expect(chart.averages[13]!).toBeLessThan(chart.upper);
		expect(chart.averages.at(-1)!).toBeGreaterThan(chart.upper);
		expect(ewmaForPeople(days.slice(0, 3), 1, SETTINGS)).toBeNull();
	});
});

describe('causes of an hour', () => {
	test('what is out of the ordinary goes before temperature, however large that is', () => {
		const hour = parts(0, [1, 0, 0], { temperatureMg: [40, 0, 0], bridgeMg: [0, 12, 0] });
		expect(namedCause(hour, 'tilt', 10)).toEqual({ cause: 'bridge', magnitudeMg: 12 });
		expect(namedCause({ ...hour, bridgeMg: ZERO }, 'tilt', 10)!.cause).toBe('temperature');
		expect(namedCause(parts(0, [1, 0, 0]), 'tilt', 10)).toBeNull();
	});

	test('surroundings are called by their kind', () => {
		const hour = parts(0, ZERO, { surroundingsMg: [0, 0, 15] });
		expect(namedCause(hour, 'tilt', 10)!.cause).toBe('tilt');
	});

	test('a film loss found by a pulse is written into the hours since it began, and no further', () => {
		const film: Vec3 = [-20, 0, 0];
		const hours = [
			parts(0, [-3, 0, 0]),
			parts(1, [-10, 1, 0]),
			parts(2, [-22, 0, 0]),
			parts(3, [0, 0, 0])
		];
		const found = writeFilmBack(hours, film, HOUR_MS, 3 * HOUR_MS);
		expect(found.map(({ filmMg }) => filmMg[0])).toEqual([0, -10, -20, 0]);
		expect(found[1]!.unexplainedMg).toEqual([0, 1, 0]);
		expect(magnitude(found[2]!.unexplainedMg)).toBeCloseTo(2, 12);
		expect(found[0]).toBe(hours[0]);
	});
});
