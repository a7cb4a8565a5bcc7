import { expect, test } from 'vitest';
import { backoffMs } from './backoff';

test('the wait doubles from 15 s up to an hour', () => {
	const middle = () => 0.5;
	expect([1, 2, 3, 4].map((n) => backoffMs(n, middle))).toEqual([15_000, 30_000, 60_000, 120_000]);
	expect(backoffMs(30, middle)).toBe(3_600_000);
});

test('it is spread by half either way', () => {
	expect(backoffMs(1, () => 0)).toBe(7_500);
	expect(backoffMs(1, () => 1)).toBe(22_500);
});
