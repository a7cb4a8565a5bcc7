import { describe, expect, test } from 'vitest';
import { exactTail, varianceOfS } from './kendall';
import { autocorrelation, hamedRaoFactor, mannKendall, ranks } from './mann-kendall';
import { gaussian, seeded } from './random';
import { theilSen } from './theil-sen';

describe('Theil–Sen', () => {
	// Source: Sen, JASA 63 (1968), the paper's example; interval from the test-suite of R package deming
	// (check-values.md 4a).
	test("Sen's example: slope 4, intercept 6, 93 % limits 26/7 and 35/8", () => {
		const line = theilSen([1, 2, 3, 4, 10, 12, 18], [9, 15, 19, 20, 45, 55, 78], { level: 0.93 })!;
		expect(line).toMatchObject({ slope: 4, intercept: 6, pairs: 21 });
		expect(line.low).toBeCloseTo(26 / 7, 12);
		expect(line.high).toBeCloseTo(35 / 8, 12);
	});

	// Source: check-values.md 4c; data [M], answer [C].
	test('one outlier does not move the line', () => {
		const line = theilSen([1, 2, 3, 4, 5, 6, 7], [1, 2, 3, 4, 5, 16, 7])!;
		expect(line).toMatchObject({ slope: 1, intercept: 0, pairs: 21 });
	});

	// Source: check-values.md 4b, Sen slope 1.0 [C] for the EPA example.
	test('the EPA example has a slope of 1', () => {
		const y = [10, 10, 10, 5, 10, 20, 18, 17, 15, 24, 15];
		expect(
			theilSen(
				y.map((_, i) => i),
				y
			)!.slope
		).toBeCloseTo(1, 12);
	});

	test('equal times alone give no line', () => {
		expect(theilSen([3, 3], [1, 2])).toBeNull();
		expect(theilSen([], [])).toBeNull();
	});

	test('95 % limits hold the true slope in 95 % of 400 series, at either end of the exact counts', () => {
		const random = seeded(11);
		for (const n of [14, 45]) {
			let held = 0;
			for (let run = 0; run < 400; run++) {
				const t = Array.from({ length: n }, (_, i) => i);
				const line = theilSen(
					t,
					t.map((x) => 0.3 * x + gaussian(random))
				)!;
				if (line.low <= 0.3 && 0.3 <= line.high) held++;
			}
			expect(held / 400).toBeGreaterThan(0.92);
		}
	});

	test('a variance factor widens the limits', () => {
		const t = Array.from({ length: 14 }, (_, i) => i);
		const random = seeded(5);
		const y = t.map((x) => 0.1 * x + gaussian(random));
		const plain = theilSen(t, y)!;
		const wide = theilSen(t, y, { varianceFactor: 3 })!;
		expect(wide.low).toBeLessThan(plain.low);
		expect(wide.high).toBeGreaterThan(plain.high);
	});
});

describe('Mann–Kendall', () => {
	// Source: US EPA QA/G-9S (2006) p. 109 (check-values.md 4b); p [C].
	test('the EPA example with ties: S 22, variance 155.33, Z 1.685', () => {
		const trend = mannKendall([10, 10, 10, 5, 10, 20, 18, 17, 15, 24, 15]);
		expect(trend.s).toBe(22);
		expect(trend.variance).toBeCloseTo(155.3333, 4);
		expect(trend.z).toBeCloseTo(1.68495, 5);
		expect(trend.p).toBeCloseTo(0.092, 4);
	});

	// Source: check-values.md 4c [C].
	test('the outlier example: S 19, variance 44.3333, Z 2.703381', () => {
		const trend = mannKendall([1, 2, 3, 4, 5, 16, 7]);
		expect(trend.s).toBe(19);
		expect(trend.variance).toBeCloseTo(44.3333, 4);
		expect(trend.z).toBeCloseTo(2.703381, 6);
	});

	// Source: check-values.md 4d, S [C]; one-sided exact p 0.117 [M]: by counting, 14 of 120 orderings.
	test('5 6 11 8 10: S 6, one-sided p 14/120', () => {
		expect(mannKendall([5, 6, 11, 8, 10]).s).toBe(6);
		expect(exactTail(5, 6)).toBeCloseTo(14 / 120, 12);
	});

	// Source: check-values.md 4e [C].
	test('10 15 14 20: S 4', () => {
		expect(mannKendall([10, 15, 14, 20]).s).toBe(4);
	});

	// Source: check-values.md 4, critical S at 90, 95, 99 % [V]; sidedness is not given there, and counting
	// shows that they are one-sided.
	test.each([
		[4, 0.1, 6],
		[4, 0.05, 6],
		[5, 0.05, 8],
		[5, 0.01, 10],
		[6, 0.05, 11],
		[6, 0.01, 13],
		[7, 0.05, 13],
		[7, 0.01, 17],
		[8, 0.05, 16],
		[9, 0.05, 18],
		[10, 0.05, 21],
		[10, 0.01, 27]
	])('n = %i: the critical S for a tail of %f is %i', (n, share, s) => {
		expect(exactTail(n, s)).toBeLessThan(share);
		expect(exactTail(n, s - 2)).toBeGreaterThan(share);
	});

	test('no change has p = 1', () => {
		expect(mannKendall([3, 3, 3])).toMatchObject({ s: 0, z: 0, p: 1 });
	});

	// Source: Kendall's formula, check-values.md 4: [n(n-1)(2n+5) - Σ t(t-1)(2t+5)]/18 by hand for n = 4.
	test('the variance of S for 4 values is 26/3', () => {
		expect(varianceOfS(4, [])).toBeCloseTo(26 / 3, 12);
	});
});

describe('Hamed–Rao', () => {
	const ar1 = (rho: number, n: number, seed: number) => {
		const random = seeded(seed);
		let x = gaussian(random) / Math.sqrt(1 - rho * rho);
		return Array.from({ length: n }, () => (x = rho * x + gaussian(random)));
	};
	const falseAlarms = (rho: number, corrected: boolean) => {
		let alarms = 0;
		for (let seed = 1; seed <= 400; seed++) {
			const values = ar1(rho, 60, seed);
			const factor = corrected ? hamedRaoFactor(values) : 1;
			if (mannKendall(values, factor).p < 0.05) alarms++;
		}
		return alarms / 400;
	};

	test('ranks share their mean where values tie', () => {
		expect(ranks([10, 20, 10, 5])).toEqual([2.5, 4, 2.5, 1]);
	});

	// Hand: mean 2.5, squares 5, lag-1 products 1.25: 0.25.
	test('the autocorrelation of 1 2 3 4 at lag 1 is 0.25', () => {
		expect(autocorrelation([1, 2, 3, 4], 1)).toBeCloseTo(0.25, 12);
	});

	test('independent values keep about 5 % false alarms', () => {
		expect(falseAlarms(0, true)).toBeLessThan(0.09);
	});

	test('at autocorrelation 0.6 it takes away a third of the false alarms of the plain test', () => {
		const plain = falseAlarms(0.6, false);
		const corrected = falseAlarms(0.6, true);
		expect(plain).toBeGreaterThan(0.2);
		expect(corrected).toBeLessThan((plain * 2) / 3);
	});

	test('a real trend under autocorrelation is still seen', () => {
		const values = ar1(0.5, 60, 3).map((x, i) => x + 0.2 * i);
		expect(mannKendall(values, hamedRaoFactor(values)).p).toBeLessThan(0.01);
	});

	test('too few values are left as they are', () => {
		expect(hamedRaoFactor([1, 2, 3])).toBe(1);
	});
});
