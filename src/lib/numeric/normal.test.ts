import { expect, test } from 'vitest';
import { normalCdf, normalQuantile, twoSidedP, twoSidedZ } from './normal';

// z = 1.959964 for 95 %: Newcombe 1998 (check-values.md 3).
test('95 % two-sided is 1.959964', () => {
	expect(twoSidedZ(0.95)).toBeCloseTo(1.959964, 6);
});

// Standard tables [M]; not a hard bound beyond what they print.
test.each([
	[0, 0.5],
	[1, 0.8413],
	[-1, 0.1587],
	[2, 0.9772],
	[3, 0.99865],
	[-4, 0.0000317]
])('Φ(%f) is %f', (z, share) => {
	expect(normalCdf(z)).toBeCloseTo(share, 4);
});

test('series and continued fraction meet at 5', () => {
	expect(normalCdf(-5.0000001) / normalCdf(-4.9999999)).toBeCloseTo(1, 5);
	expect(normalCdf(5) + normalCdf(-5)).toBeCloseTo(1, 14);
});

test.each([1e-12, 1e-5, 0.025, 0.3, 0.5, 0.9, 0.999999])(
	'the quantile of %f leads back to it',
	(p) => {
		expect(normalCdf(normalQuantile(p)) / p).toBeCloseTo(1, 10);
	}
);

test('the ends are infinite', () => {
	expect(normalQuantile(0)).toBe(-Infinity);
	expect(normalQuantile(1)).toBe(Infinity);
});

test('a score of 0 has p = 1', () => {
	expect(twoSidedP(0)).toBe(1);
});
