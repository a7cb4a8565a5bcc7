import { expect, test } from 'vitest';
import { bootstrapClusters } from './bootstrap';
import { gaussian, seeded } from './random';

const mean = (values: readonly number[]) => values.reduce((sum, v) => sum + v, 0) / values.length;

test('the same seed gives the same limits, another seed others', () => {
	const values = [1, 4, 2, 8, 5, 7];
	const limits = (seed: number) => bootstrapClusters(values, mean, { seed });
	expect(limits(3)).toEqual(limits(3));
	expect(limits(3)).not.toEqual(limits(4));
});

test('limits of a mean are about 1.96 standard errors either way', () => {
	const random = seeded(2);
	const values = Array.from({ length: 400 }, () => gaussian(random));
	const limits = bootstrapClusters(values, mean, { seed: 1, rounds: 2000 })!;
	expect(limits.high - limits.low).toBeGreaterThan(2 * 1.96 * 0.05 * 0.85);
	expect(limits.high - limits.low).toBeLessThan(2 * 1.96 * 0.05 * 1.15);
});

test('one cluster has no limits', () => {
	expect(bootstrapClusters([1], mean, { seed: 1 })).toBeNull();
});

test('uniform numbers have mean 1/2 and variance 1/12, and neighbours do not go together', () => {
	const random = seeded(99);
	const values = Array.from({ length: 100_000 }, random);
	const m = mean(values);
	expect(Math.abs(m - 0.5)).toBeLessThan(0.005);
	expect(Math.abs(mean(values.map((v) => (v - m) ** 2)) - 1 / 12)).toBeLessThan(0.002);
	expect(Math.abs(mean(values.slice(1).map((v, i) => (v - m) * (values[i]! - m))))).toBeLessThan(
		0.001
	);
});
