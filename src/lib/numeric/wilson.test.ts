import { describe, expect, test } from 'vitest';
import { newcombeDifference, wilson } from './wilson';

// Source: Newcombe, Stat. Med. 17 (1998) 857, Table I, method 3 (check-values.md 3), exact to 6 places [C].
test.each([
	[81, 263, 0.255289, 0.36621],
	[15, 148, 0.062386, 0.160487],
	[0, 20, 0, 0.161125],
	[1, 29, 0.006113, 0.171755],
	[29, 29, 0.88303, 1],
	[990, 1000, 0.981691, 0.994559],
	[9876, 10_000, 0.985236, 0.989589]
])('%i of %i: %f to %f', (hits, n, low, high) => {
	const limits = wilson(hits, n)!;
	expect(limits.low).toBeCloseTo(low, 6);
	expect(limits.high).toBeCloseTo(high, 6);
});

// Source: check-values.md 3 [V] and 7 [C].
test.each([
	[0, 10, 0, 0.2775],
	[10, 10, 0.7225, 1],
	[80, 82, 0.9154, 0.9933]
])('%i of %i: %f to %f', (hits, n, low, high) => {
	expect(wilson(hits, n)!.low).toBeCloseTo(low, 4);
	expect(wilson(hits, n)!.high).toBeCloseTo(high, 4);
});

test('the ends are exactly 0 and 1', () => {
	expect(wilson(0, 20)!.low).toBe(0);
	expect(wilson(29, 29)!.high).toBe(1);
});

test('without looks there is no interval', () => {
	expect(wilson(0, 0)).toBeNull();
});

test('fewer effective looks give a wider interval', () => {
	const all = wilson(95, 100)!;
	const effective = wilson(95 / 2.5, 40)!;
	expect(effective.low).toBeLessThan(all.low);
	expect(effective.high).toBeGreaterThan(all.high);
});

describe('differences', () => {
	// Source: Newcombe, Stat. Med. 17 (1998) 873, Table II, method 10 (check-values.md 3).
	test.each([
		[56, 70, 48, 80, 0.0524, 0.3339],
		[9, 10, 3, 10, 0.1705, 0.809],
		[6, 7, 2, 7, 0.0582, 0.8062]
	])('%i/%i - %i/%i: %f to %f', (a, m, b, n, low, high) => {
		const found = newcombeDifference({ hits: a, n: m }, { hits: b, n })!;
		expect(found.difference).toBeCloseTo(a / m - b / n, 12);
		expect(found.low).toBeCloseTo(low, 4);
		expect(found.high).toBeCloseTo(high, 4);
	});

	test('without looks on one side there is none', () => {
		expect(newcombeDifference({ hits: 1, n: 2 }, { hits: 0, n: 0 })).toBeNull();
	});
});
