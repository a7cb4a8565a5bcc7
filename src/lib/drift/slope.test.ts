import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { gaussian, seeded } from '$lib/numeric/random';
import type { Vec3 } from '$lib/magnetics/vector';
import { driftSettings } from './params';
import { addToSlope, breakSlope, SLOPE_START, slopeOf, type SlopeState } from './slope';

const SETTINGS = driftSettings();
const HOUR_MS = 3_600_000;
const swing = (h: number, amplitudeC = 6) => 20 + amplitudeC * Math.sin((2 * Math.PI * h) / 24);

function run(
	hours: number,
	level: (h: number, tempC: number) => Vec3,
	stay: (h: number) => string | null = () => null,
	amplitudeC = 6
): SlopeState {
	let state = SLOPE_START;
	for (let h = 0; h < hours; h++) {
		const tempC = swing(h, amplitudeC);
		const point = { hourMs: h * HOUR_MS, levelMg: level(h, tempC), tempC, stay: stay(h) };
		state = addToSlope(state, point, SETTINGS);
	}
	return state;
}

describe('the slope over temperature', () => {
	// Method 5.1: triples are exact against any drift that is linear over a day.
	test('a linear drift of any speed leaves it exact', () => {
		const speed = fc.double({ min: -3, max: 3, noNaN: true });
		fc.assert(
			fc.property(speed, speed, (mgPerHour, perC) => {
				const state = run(30, (h, t) => [perC * t + mgPerHour * h, -perC * t, 0]);
				const slope = slopeOf(state, SETTINGS)!;
				expect(slope.perC[0]).toBeCloseTo(perC, 8);
				expect(slope.perC[1]).toBeCloseTo(-perC, 8);
				expect(slope.perC[2]).toBeCloseTo(0, 8);
			}),
			{ numRuns: 30 }
		);
	});

	test('a day that bends under 2 °C tells nothing: not known, never a guess', () => {
		expect(
			slopeOf(
				run(48, (_h, t) => [t, t, t], undefined, 0.5),
				SETTINGS
			)
		).toBeNull();
		expect(slopeOf(SLOPE_START, SETTINGS)).toBeNull();
	});

	test('it is known from the first day', () => {
		expect(
			slopeOf(
				run(20, (_h, t) => [0.7 * t, 0, 0]),
				SETTINGS
			)!.perC[0]
		).toBeCloseTo(0.7, 8);
	});

	test('a step on one day of ten does not move it', () => {
		const state = run(240, (h, t) => [0.5 * t + (h > 130 ? 40 : 0), 0, 0]);
		expect(slopeOf(state, SETTINGS)!.perC[0]).toBeCloseTo(0.5, 2);
	});

	test('hours of one stay count among themselves, never with vacant ones', () => {
		const stay = (h: number) => (h % 24 >= 8 && h % 24 < 20 ? `day ${Math.floor(h / 24)}` : null);
		const state = run(72, (h, t) => [0.5 * t + (stay(h) === null ? 0 : 150), 0, 0], stay);
		expect(slopeOf(state, SETTINGS)!.perC[0]).toBeCloseTo(0.5, 8);
	});

	test('a pulse breaks triples across it', () => {
		const before = run(12, (_h, t) => [t, 0, 0]);
		expect(breakSlope(before).recent).toEqual([]);
	});

	test('twice its standard error holds the truth in at least 9 of 10 noisy fortnights', () => {
		const random = seeded(21);
		let held = 0;
		for (let i = 0; i < 60; i++) {
			let residual = 0;
			const state = run(14 * 24, (_h, t) => {
				residual = 0.9 * residual + 0.4 * gaussian(random);
				return [0.6 * t + residual, 0, 0];
			});
			const { perC, errorPerC } = slopeOf(state, SETTINGS)!;
			if (Math.abs(perC[0] - 0.6) <= 2 * errorPerC[0]) held++;
		}
		expect(held).toBeGreaterThanOrEqual(54);
	}, 20_000);

	test('what is remembered is bounded', () => {
		const state = run(100 * 24, (_h, t) => [t, t, t]);
		expect(state.recent.length).toBeLessThanOrEqual(25);
		expect(state.hours.length).toBeLessThanOrEqual(24);
		expect(state.days.length).toBeLessThanOrEqual(SETTINGS.slopeDays);
	}, 20_000);
});
