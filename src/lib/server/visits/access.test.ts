import { expect, test } from 'vitest';
import { daysBetween, localDay } from './access';

test("today is the site's day, not the server's", () => {
	// 23:30 UTC on 30 Nov is 00:30 on 1 Dec at UTC+1 and 18:30 on 30 Nov at UTC-5 (Etc/GMT signs are turned over).
	const atMs = Date.parse('2026-11-30T23:30:00Z');
	expect(localDay(atMs, 'Etc/GMT-1')).toBe('2026-12-01');
	expect(localDay(atMs, 'Etc/GMT+5')).toBe('2026-11-30');
});

test('a permit is good on its last day and over on the day after', () => {
	expect(daysBetween('2026-12-01', '2026-12-01')).toBe(0);
	expect(daysBetween('2026-12-02', '2026-12-01')).toBe(-1);
	// 2028 is a leap year: 28 Feb to 1 Mar is two days.
	expect(daysBetween('2028-02-28', '2028-03-01')).toBe(2);
});
