import { expect, test } from 'vitest';
import { chain, type Placed } from './chain';

const node = (id: number, eastM: number | null, northM = 0, siteId = 1): Placed => ({
	id,
	siteId,
	eastM,
	northM: eastM === null ? null : northM
});

test('nodes within 4 m are chained, however long the chain', () => {
	const row = Array.from({ length: 50 }, (_, i) => node(i + 1, i * 2.5));
	const { groups, neighbours } = chain(row);
	expect(groups).toEqual([row.map(({ id }) => id)]);
	expect(neighbours.get(10)).toEqual([9, 11]);
});

test('4 m is near, 4.01 m is not', () => {
	expect(chain([node(1, 0), node(2, 4)]).groups).toEqual([[1, 2]]);
	expect(chain([node(1, 0), node(2, 4.01)]).groups).toEqual([[1], [2]]);
});

test('a bridge joins two groups, whatever the order of reading', () => {
	const nodes = [node(5, 0), node(2, 6), node(9, 3)];
	for (const order of [nodes, [...nodes].reverse()])
		expect(chain(order).groups).toEqual([[2, 5, 9]]);
});

test('diagonals count by distance, also over the edges of cells and below zero', () => {
	expect(chain([node(1, -0.1, -0.1), node(2, 2.6, 2.6)]).groups).toEqual([[1, 2]]);
	expect(chain([node(1, -0.1, -0.1), node(2, 2.9, 2.9)]).groups).toEqual([[1], [2]]);
});

test('another site is never near, and a node without a place is alone', () => {
	expect(chain([node(1, 0), node(2, 0, 0, 2), node(3, null), node(4, null)]).groups).toEqual([
		[1],
		[2],
		[3],
		[4]
	]);
});
