import { expect, test } from 'vitest';
import type { HistoryPoint } from '$lib/server/store/queries/stays';
import { staysOf } from './stays';

const point = (atMs: number, state: HistoryPoint['state']): HistoryPoint => ({
	bayId: 1,
	bay: 'A-01',
	atMs,
	state
});
const stay = (fromMs: number, toMs: number | null, end: 'departure' | 'unknown' | null) => ({
	bayId: 1,
	bay: 'A-01',
	fromMs,
	toMs,
	end
});

test('a stay runs from taken to free', () => {
	expect(staysOf([point(10, 'occupied'), point(20, 'vacant')])).toEqual([
		stay(10, 20, 'departure')
	]);
});

test('an entry that says taken again does not cut a stay in two', () => {
	expect(staysOf([point(10, 'occupied'), point(15, 'occupied'), point(20, 'vacant')])).toEqual([
		stay(10, 20, 'departure')
	]);
});

test('a stay that ends in not known says so, and a new one begins when it is known again', () => {
	expect(
		staysOf([
			point(10, 'occupied'),
			point(20, 'unknown'),
			point(30, 'occupied'),
			point(40, 'vacant')
		])
	).toEqual([stay(10, 20, 'unknown'), stay(30, 40, 'departure')]);
});

test('a stay under way has no end', () => {
	expect(staysOf([point(0, 'vacant'), point(10, 'occupied')])).toEqual([stay(10, null, null)]);
});
