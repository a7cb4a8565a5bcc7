import { expect, test } from 'vitest';
import { seeded } from '$lib/numeric/random';
import { lengthM, walkOrder, type Place } from './walk-order';

const at = (eastM: number, northM: number): Place => ({ eastM, northM });

test('bays of a row are walked from one end to the other', () => {
	// By hand: five bays 2.5 m apart, given mixed up; the shortest walk is 4 × 2.5 m.
	const order = walkOrder([at(5, 0), at(0, 0), at(10, 0), at(2.5, 0), at(7.5, 0)]);
	expect([order, [...order].reverse()]).toContainEqual([1, 3, 0, 4, 2]);
});

test('two rows facing each other are walked up and back, not in a zigzag', () => {
	// By hand: rows 11 m apart, three bays each 2.5 m apart: 5 + 11 + 5 = 21 m; a zigzag takes 38 m.
	const places = [at(0, 0), at(0, 11), at(2.5, 0), at(2.5, 11), at(5, 0), at(5, 11)];
	expect(lengthM(places, walkOrder(places))).toBeCloseTo(21, 9);
});

test('no place and one place are walks too', () => {
	expect(walkOrder([])).toEqual([]);
	expect(walkOrder([at(3, 4)])).toEqual([0]);
	expect(lengthM([at(3, 4)], [0])).toBe(0);
});

test('places on one spot do not keep it going for ever', () => {
	expect(walkOrder([at(1, 1), at(1, 1), at(1, 1), at(1, 1)])).toHaveLength(4);
});

function permutations(items: number[]): number[][] {
	if (items.length <= 1) return [items];
	return items.flatMap((item, i) =>
		permutations([...items.slice(0, i), ...items.slice(i + 1)]).map((rest) => [item, ...rest])
	);
}

test('up to 8 places it is within 5 % of the shortest of all orders, and nearly always that one', () => {
	const random = seeded(7);
	let exact = 0;
	const cases = 18;
	for (let n = 0; n < cases; n++) {
		const places = Array.from({ length: 3 + (n % 6) }, () => at(random() * 100, random() * 60));
		const shortestM = Math.min(
			...permutations(places.map((_, i) => i)).map((order) => lengthM(places, order))
		);
		const order = walkOrder(places);
		expect([...order].sort((a, b) => a - b)).toEqual(places.map((_, i) => i));
		const walkM = lengthM(places, order);
		expect(walkM).toBeLessThanOrEqual(shortestM * 1.05);
		if (walkM < shortestM + 1e-6) exact++;
	}
	expect(exact).toBeGreaterThanOrEqual(cases - 2);
});

test('60 places are ordered within two seconds', () => {
	const random = seeded(11);
	const places = Array.from({ length: 60 }, () => at(random() * 300, random() * 200));
	const startedMs = performance.now();
	expect(walkOrder(places)).toHaveLength(60);
	expect(performance.now() - startedMs).toBeLessThan(2_000);
});
