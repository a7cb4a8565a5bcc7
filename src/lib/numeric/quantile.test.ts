import { expect, test } from 'vitest';
import { differenceSigma, mad, MAD_TO_SIGMA, robustSigma } from './mad';
import { normalQuantile } from './normal';
import { median, quantile } from './quantile';
import { gaussian, seeded } from './random';

test('the median of an even list is the mean of the middle two, and the list is left as it was', () => {
	const values = [4, 1, 3, 2];
	expect(median(values)).toBe(2.5);
	expect(values).toEqual([4, 1, 3, 2]);
});

// Hand: 5 values, share 0.1 lies 0.4 of the way from the first to the second.
test('a quantile lies straight between order statistics', () => {
	expect(quantile([10, 20, 30, 40, 50], 0.1)).toBeCloseTo(14, 12);
	expect(quantile([10, 20, 30, 40, 50], 1)).toBe(50);
});

test('an empty list is a bug of the caller', () => {
	expect(() => median([])).toThrow();
	expect(() => mad([])).toThrow();
});

// Hand: median 2, deviations 1 1 0 0 2 4 7, their median 1.
test('the MAD of 1 1 2 2 4 6 9 is 1', () => {
	expect(mad([1, 1, 2, 2, 4, 6, 9])).toBe(1);
	expect(robustSigma([1, 1, 2, 2, 4, 6, 9])).toBe(MAD_TO_SIGMA);
});

test('1.4826 is the inverse of the normal upper quartile', () => {
	expect(MAD_TO_SIGMA).toBeCloseTo(1 / normalQuantile(0.75), 4);
});

test('noise is told from drift: a steep line with 1 mG of noise shows 1 mG', () => {
	const random = seeded(7);
	const values = Array.from({ length: 4000 }, (_, i) => i * 0.5 + gaussian(random));
	const sigma = differenceSigma(values)!;
	expect(sigma).toBeGreaterThan(0.95);
	expect(sigma).toBeLessThan(1.05);
	expect(differenceSigma([1])).toBeNull();
});
