import { expect, test } from 'vitest';
import { DAY_MS, DAYS_AHEAD, DAYS_BACK, missingBounds } from './partitions';

const today = Date.UTC(2026, 0, 15);
const noon = today + DAY_MS / 2;

test('a new table gets one wide partition up to three weeks back, then one a day to thirty ahead', () => {
	const bounds = missingBounds(Date.UTC(2020, 0, 1), noon);
	expect(bounds[0]).toBe(today - DAYS_BACK * DAY_MS);
	expect(bounds.at(-1)).toBe(today + (DAYS_AHEAD + 1) * DAY_MS);
	expect(bounds).toHaveLength(DAYS_BACK + DAYS_AHEAD + 2);
});

test('a day later one more is missing, and none twice', () => {
	const last = missingBounds(Date.UTC(2020, 0, 1), noon).at(-1) ?? 0;
	expect(missingBounds(last, noon)).toEqual([]);
	expect(missingBounds(last, noon + DAY_MS)).toEqual([last + DAY_MS]);
});

test('after a year of standstill the gap becomes one wide partition', () => {
	const bounds = missingBounds(today - 365 * DAY_MS, noon);
	expect(bounds[0]).toBe(today - DAYS_BACK * DAY_MS);
});
