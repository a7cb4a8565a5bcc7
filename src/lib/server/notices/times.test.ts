import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { defaultSettings } from '$lib/schemas/notices';
import { deadlineOf } from './deadline';
import { afterQuiet, dueMs, isQuiet } from './due';

// Wall times checked by hand: 2026-12-01 is a Tuesday; Berlin is UTC+1 then.
const at = (text: string): number => Date.parse(text);
const iso = (ms: number): string => new Date(ms).toISOString().slice(0, 16);
const BERLIN = 'Europe/Berlin';

describe('deadlines (issue 6)', () => {
	const tuesday = at('2026-12-01T09:00Z');
	test('site late 30 min; inverted, clipped, not cured 1 working day; refresh due 2; low cell 10', () => {
		expect(iso(deadlineOf('site_late', tuesday, BERLIN))).toBe('2026-12-01T09:30');
		for (const kind of ['inverted', 'clipped', 'refresh_not_cured'] as const)
			expect(iso(deadlineOf(kind, tuesday, BERLIN))).toBe('2026-12-02T09:00');
		expect(iso(deadlineOf('refresh_due', tuesday, BERLIN))).toBe('2026-12-03T09:00');
		// Two weeks of five working days each.
		expect(iso(deadlineOf('low_cell', tuesday, BERLIN))).toBe('2026-12-15T09:00');
	});
	test('a weekend lies between Friday and the next working day', () => {
		expect(iso(deadlineOf('inverted', at('2026-12-04T15:00Z'), BERLIN))).toBe('2026-12-07T15:00');
	});
	test('what is found on a Saturday counts from Monday 08:00 at the site', () => {
		// 08:00 in Berlin is 07:00 UTC.
		expect(iso(deadlineOf('inverted', at('2026-12-05T15:00Z'), BERLIN))).toBe('2026-12-08T07:00');
	});
	test('the clock on the wall stays over a change of the clocks', () => {
		// Berlin goes from UTC+1 to UTC+2 on Sunday 2026-03-29.
		expect(iso(deadlineOf('inverted', at('2026-03-27T09:00Z'), BERLIN))).toBe('2026-03-30T08:00');
	});
});

describe('quiet hours (issue 6: 19:00 to 07:00 and weekends, in the person’s own zone)', () => {
	const settings = defaultSettings('maintenance');
	const due = (kind: Parameters<typeof dueMs>[1], nowMs: number, urged = false) =>
		dueMs(settings, kind, { nowMs, zone: BERLIN, urged });

	test('by day it is mailed at once, by night at 07:00', () => {
		expect(due('refresh_due', at('2026-12-01T10:00Z'))).toBe(at('2026-12-01T10:00Z'));
		expect(due('refresh_due', at('2026-12-01T18:30Z'))).toBe(at('2026-12-02T06:00Z'));
		expect(due('refresh_due', at('2026-12-01T02:00Z'))).toBe(at('2026-12-01T06:00Z'));
	});
	test('from Friday evening on Monday 07:00 is the first time', () => {
		expect(due('refresh_due', at('2026-12-04T18:30Z'))).toBe(at('2026-12-07T06:00Z'));
		expect(due('refresh_due', at('2026-12-05T11:00Z'))).toBe(at('2026-12-07T06:00Z'));
	});
	test('site late is mailed at any hour', () => {
		expect(due('site_late', at('2026-12-06T02:00Z'))).toBe(at('2026-12-06T02:00Z'));
	});
	test('a daily digest waits for its time, an escalation does not', () => {
		expect(due('drifting', at('2026-12-01T10:00Z'))).toBe(at('2026-12-02T06:00Z'));
		expect(due('drifting', at('2026-12-01T10:00Z'), true)).toBe(at('2026-12-01T10:00Z'));
	});
	test('an hourly digest waits for the full hour', () => {
		const hourly = { ...settings, paces: { ...settings.paces, drifting: 'hourly' as const } };
		const at10 = { nowMs: at('2026-12-01T10:17Z'), zone: BERLIN, urged: false };
		expect(dueMs(hourly, 'drifting', at10)).toBe(at('2026-12-01T11:00Z'));
	});
	test('who switched mail off gets none, escalations neither', () => {
		const off = { ...settings, off: true };
		expect(dueMs(off, 'site_late', { nowMs: 0, zone: 'UTC', urged: true })).toBeNull();
	});
	test('whatever the hours and the zone: never before, never quiet, within four days', () => {
		const zones = fc.constantFrom(
			BERLIN,
			'UTC',
			'America/St_Johns',
			'Pacific/Auckland',
			'Asia/Kolkata'
		);
		const minute = fc.integer({ min: 0, max: 1439 });
		fc.assert(
			fc.property(
				fc.integer({ min: at('2026-01-01'), max: at('2027-12-31') }),
				...([minute, minute, fc.boolean(), zones] as const),
				(nowMs, quietFromMin, quietToMin, quietWeekends, zone) => {
					const quiet = { quietFromMin, quietToMin, quietWeekends };
					const then = afterQuiet(nowMs, quiet, zone);
					expect(then).toBeGreaterThanOrEqual(nowMs);
					expect(isQuiet(then, quiet, zone)).toBe(false);
					expect(then - nowMs).toBeLessThan(4 * 86_400_000);
				}
			),
			{ numRuns: 300 }
		);
	});
});
