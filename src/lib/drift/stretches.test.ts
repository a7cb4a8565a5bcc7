import { expect, test } from 'vitest';
import { stretchesOf, type StateEntry } from './stretches';

const S = 1000;
const HOUR = { fromMs: 3_600 * S, toMs: 7_200 * S };
const entries = (...of: [number, StateEntry['state']][]): StateEntry[] =>
	of.map(([atS, state]) => ({ atMs: atS * S, state }));

test('a vehicle beside an empty bay makes no quiet field of its time, 10 s off each change', () => {
	const own = entries([0, 'vacant']);
	const near = entries([0, 'vacant'], [4_000, 'occupied'], [5_000, 'vacant']);
	expect(stretchesOf(own, HOUR, [near])).toEqual([
		{ fromMs: 3_600 * S, toMs: 3_990 * S, stay: null },
		{ fromMs: 4_010 * S, toMs: 4_990 * S, stay: '4000' },
		{ fromMs: 5_010 * S, toMs: 7_200 * S, stay: null }
	]);
});

test('what stands beside it has the same name in each hour as long as nothing moves', () => {
	const own = entries([0, 'vacant']);
	const near = entries([1_000, 'occupied']);
	const next = { fromMs: HOUR.toMs, toMs: HOUR.toMs + 3_600 * S };
	expect(stretchesOf(own, HOUR, [near])).toEqual([{ ...HOUR, stay: '1000' }]);
	expect(stretchesOf(own, next, [near])).toEqual([{ ...next, stay: '1000' }]);
});

test('one of two vehicles beside it leaves: the level is another, and so is the name', () => {
	const own = entries([0, 'vacant']);
	const a = entries([1_000, 'occupied']);
	const b = entries([2_000, 'occupied'], [4_000, 'vacant']);
	expect(stretchesOf(own, HOUR, [a, b]).map(({ stay }) => stay)).toEqual(['2000', '4000']);
});

test('a neighbour that nobody knows anything of does not take the quiet field away', () => {
	const near = entries([0, 'unknown']);
	expect(stretchesOf(entries([0, 'vacant']), HOUR, [near, []])).toEqual([{ ...HOUR, stay: null }]);
});

test('a stay goes on by its own name once the vehicle beside it has left', () => {
	const own = entries([3_000, 'occupied']);
	const near = entries([0, 'vacant'], [4_000, 'occupied'], [5_000, 'vacant']);
	expect(stretchesOf(own, HOUR, [near]).map(({ stay }) => stay)).toEqual(['3000', '4000', '3000']);
});
