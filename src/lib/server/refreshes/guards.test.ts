import { describe, expect, test } from 'vitest';
import { builtInProfile } from '$lib/magnetics/sensor-profile';
import { emptyWords, type Spell } from './empty-hours';
import { GUARD_WORDS, GUARDS, holding, type Guard, type GuardFacts } from './guards';
import { isWithin, localTime } from './local-time';
import { REFRESH_PARAMS as P } from './params';
import { priceOf } from './price';
import { dueReasons } from './settings';

const HOUR = 3_600_000;
const NOW = Date.UTC(2026, 2, 3, 2, 0);
const free: GuardFacts = {
	paused: false,
	withdrawn: false,
	heardBoot: 3,
	storm: false,
	silent: false,
	bay: 'vacant',
	baySinceMs: NOW - HOUR,
	anyHour: false,
	localMinute: 120,
	quietFromMin: 60,
	quietToMin: 300,
	batteryMv: 3000,
	batteryFloorMv: 3000,
	lastPulseAtMs: NOW - HOUR,
	lastEndAtMs: null,
	holdOffMs: 12 * HOUR,
	underWay: 2,
	mostAtOnce: 3
};

describe('guards (method 7, waiting)', () => {
	test('at every limit it may just go', () => {
		expect(holding(free, NOW, P)).toEqual([]);
	});
	test.each<[Guard, Partial<GuardFacts>]>([
		['paused', { paused: true }],
		['withdrawn', { withdrawn: true }],
		['never_heard', { heardBoot: null }],
		['storm', { storm: true }],
		['silent', { silent: true }],
		['bay_taken', { bay: 'occupied' }],
		['bay_not_known', { bay: 'unknown' }],
		['just_left', { baySinceMs: NOW - 59_999 }],
		['quiet_hours', { localMinute: 300 }],
		['battery_low', { batteryMv: 2999 }],
		['battery_not_known', { batteryMv: null }],
		['pulse_within_hour', { lastPulseAtMs: NOW - HOUR + 1 }],
		['hold_off', { lastEndAtMs: NOW - 12 * HOUR + 1 }],
		['site_busy', { underWay: 3 }]
	])('%s holds it', (guard, more) => {
		expect(holding({ ...free, ...more }, NOW, P)).toEqual([guard]);
		expect(GUARD_WORDS[guard]).not.toBe('');
	});
	test('every guard has a test above and words', () => {
		expect(Object.keys(GUARD_WORDS).sort()).toEqual([...GUARDS].sort());
		expect(GUARDS).toHaveLength(14);
	});
	test('an approver may let it run outside quiet hours', () => {
		expect(holding({ ...free, localMinute: 700, anyHour: true }, NOW, P)).toEqual([]);
	});
});

test('quiet hours may run over midnight', () => {
	expect([1350, 10, 299].map((m) => isWithin(m, 1320, 300))).toEqual([true, true, true]);
	expect([300, 1319].map((m) => isWithin(m, 1320, 300))).toEqual([false, false]);
});

test('local time follows the change of the clocks', () => {
	// Berlin: UTC+1 on 28 March 2026 (a Saturday), UTC+2 a day later (EU directive 2000/84/EC).
	const berlin = (atMs: number) => localTime(atMs, 'Europe/Berlin');
	expect(berlin(Date.UTC(2026, 2, 28, 12))).toEqual({ weekday: 5, minute: 780 });
	expect(berlin(Date.UTC(2026, 2, 29, 12))).toEqual({ weekday: 6, minute: 840 });
});

describe('when a bay is usually empty', () => {
	const monday = Date.UTC(2026, 2, 2);
	const day = 24 * HOUR;
	/** Four weeks taken but for Tuesdays from 10 to 14 h. */
	const spells: Spell[] = [0, 1, 2, 3].flatMap((week): Spell[] => {
		const from = monday + week * 7 * day;
		const tuesday = from + day;
		return [
			{ state: 'occupied', fromMs: from, toMs: tuesday + 10 * HOUR },
			{ state: 'vacant', fromMs: tuesday + 10 * HOUR, toMs: tuesday + 14 * HOUR },
			{ state: 'occupied', fromMs: tuesday + 14 * HOUR, toMs: from + 7 * day }
		];
	});
	test('four Tuesdays empty from 10 to 14 h', () => {
		expect(emptyWords(spells, 'Etc/UTC')).toBe('mostly Tue 10–14 h');
	});
	test('nights of every day', () => {
		const nights = Array.from({ length: 28 }, (_, i): Spell[] => [
			{ state: 'vacant', fromMs: monday + i * day, toMs: monday + i * day + 6 * HOUR },
			{ state: 'occupied', fromMs: monday + i * day + 6 * HOUR, toMs: monday + (i + 1) * day }
		]).flat();
		expect(emptyWords(nights, 'Etc/UTC')).toBe('mostly every day 0–6 h');
	});
	test('one week alone says nothing, nor does a bay that is never empty', () => {
		expect(emptyWords(spells.slice(0, 3), 'Etc/UTC')).toBeNull();
		expect(
			emptyWords([{ state: 'occupied', fromMs: monday, toMs: monday + 28 * day }], 'Etc/UTC')
		).toBeNull();
	});
});

test('the price of one film refresh, by hand from the profile', () => {
	// 3 pulses × 120 + 64 frames × 1500 + 3 s × 32,000 µC = 192,360 µC = 192.36 mC.
	// A day: 86,400 s × 12 µA + 1440 frames × 1500 µC + 1 % of 8500 mAh × 3.6e6 / 365.25 = 4,034,584 µC.
	const price = priceOf(builtInProfile('amr-18-16384')!, 60, P);
	expect(price.chargeMc).toBeCloseTo(192.36, 6);
	expect(price.batteryDays).toBeCloseTo(192_360 / 4_034_584.5, 4);
});

test('reasons for a film refresh by what detection and drift say (method 6)', () => {
	const reasons = (conditions: string[], unexplainedSinceMs: number | null = null) =>
		dueReasons({ conditions, unexplainedSinceMs });
	expect(reasons(['in_service'])).toEqual([]);
	expect(reasons(['refresh_due'])).toEqual(['strong_field']);
	expect(reasons(['inverted', 'refresh_due'])).toEqual(['inverted']);
	expect(reasons(['clipped'])).toEqual(['strong_field']);
	expect(reasons(['drifting', 'refresh_due'], 5)).toEqual(['unexplained']);
});
