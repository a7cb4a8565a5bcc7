import { describe, expect, test } from 'vitest';
import { DRIFT_PARAMS, driftSettings } from './params';
import { refreshNeed, visitNeed, type FilmFacts, type PairAtReference } from './refresh-need';
import type { Vec3 } from '$lib/magnetics/vector';

const SETTINGS = driftSettings();
const QUIET: FilmFacts = {
	lastPulseAtMs: 1000,
	lastClippedAtMs: null,
	lastOverFilmAtMs: null,
	invertedSinceMs: null,
	refreshHours: 0,
	refreshBeganMs: null
};

describe('a film refresh is due', () => {
	test.each<[string, Partial<FilmFacts>, string[]]>([
		['nothing', {}, []],
		['clipped since the last pulse', { lastClippedAtMs: 1001 }, ['clipped']],
		['clipped before the last pulse', { lastClippedAtMs: 999 }, []],
		['clipped, never pulsed', { lastClippedAtMs: 5, lastPulseAtMs: null }, ['clipped']],
		['over the film limit since', { lastOverFilmAtMs: 2000 }, ['over_film_limit']],
		['inverted', { invertedSinceMs: 500 }, ['inverted']],
		['16 mG for 6 h', { refreshHours: 6, refreshBeganMs: 2000 }, ['unexplained']],
		['16 mG for 5 h', { refreshHours: 5, refreshBeganMs: 2000 }, []],
		['16 mG for 6 h, pulsed since', { refreshHours: 6, refreshBeganMs: 900 }, []]
	])('%s', (_title, facts, reasons) => {
		const need = refreshNeed({ ...QUIET, ...facts }, SETTINGS);
		expect(need.reasons.map(({ reason }) => reason)).toEqual(reasons);
		expect(need.due).toBe(reasons.length > 0);
	});
});

describe('a visit, since no pulse cures it', () => {
	const DAY_MS = 86_400_000;
	const field: Vec3 = [0, 0, 450];
	const pair = (day: number, offsetX: number, fieldMg = field): PairAtReference => ({
		atMs: day * DAY_MS,
		offsetMg: [offsetX, 0, 0],
		fieldMg
	});

	test.each<[string, PairAtReference[], string[]]>([
		['no pairs', [], []],
		['steady', [pair(0, 0), pair(7, 5)], []],
		['one jump of 20 mG', [pair(0, 0), pair(7, 20)], []],
		['two jumps in 30 days', [pair(0, 0), pair(7, 20), pair(14, -5)], ['offset_unsteady']],
		['two jumps, the first 31 days ago', [pair(0, 0), pair(7, 20), pair(38, -5)], []],
		['gain off by 7 %', [pair(0, 0, [0, 0, 418])], ['gain_off']],
		['gain off by 6 %', [pair(0, 0, [0, 0, 424])], []]
	])('%s', (_title, pairs, reasons) => {
		expect(visitNeed(pairs, field, SETTINGS)).toEqual(reasons);
	});
});

test('a pair with a vehicle over it says nothing of the gain', () => {
	const pairs: PairAtReference[] = [{ atMs: 1000, offsetMg: [0, 0, 0], fieldMg: null }];
	expect(visitNeed(pairs, [0, 0, 450], SETTINGS)).toEqual([]);
});

describe('settings', () => {
	test('every default lies within its own range and gives its reason', () => {
		for (const { defaultValue, min, max, reason } of Object.values(DRIFT_PARAMS)) {
			expect(defaultValue).toBeGreaterThanOrEqual(min);
			expect(defaultValue).toBeLessThanOrEqual(max);
			expect(reason.length).toBeGreaterThan(10);
		}
	});

	test('an override is taken, and held at the ends of its range', () => {
		expect(driftSettings({ driftingMg: 12 }).driftingMg).toBe(12);
		expect(driftSettings({ driftingMg: 1 }).driftingMg).toBe(4);
		expect(driftSettings({ nothing: 1 })).toEqual(SETTINGS);
	});
});
