import { expect, test } from 'vitest';
import type { Vec3 } from '$lib/magnetics/vector';
import { hourRecords, smoothedTemps, type StillRow } from './hour';

const MIN_MS = 60_000;
const HOUR_MS = 60 * MIN_MS;
const row = (min: number, x: number, stay: string | null = null): StillRow => ({
	atMs: min * MIN_MS,
	fieldMg: [x, 0, 0] as Vec3,
	offsetMg: [1, 2, 3],
	stay
});
const temp = (min: number, tempC: number) => ({ atMs: min * MIN_MS, tempC });

test('temperature is the mean within 5 min either way', () => {
	const rows = [row(10, 0), row(30, 0)];
	const samples = [temp(4, 90), temp(5, 10), temp(10, 20), temp(15, 30), temp(16, 90)];
	expect(smoothedTemps(rows, samples)).toEqual([20, null]);
});

test('a row over 5 min from any temperature does not count', () => {
	const [hour] = hourRecords([row(1, 10), row(2, 12), row(30, 99)], [temp(2, 21)]);
	expect(hour).toMatchObject({ hourMs: 0, n: 2, fieldMg: [11, 0, 0], tempC: 21 });
});

test('an hour without any temperature keeps its field and says null', () => {
	expect(hourRecords([row(1, 10), row(2, 12)], [])[0]).toMatchObject({ n: 2, tempC: null });
});

test('vacant rows, each stay and each hour are summed apart', () => {
	const rows = [row(5, 1), row(20, 200, 'a'), row(40, 300, 'b'), row(65, 2)];
	const found = hourRecords(
		rows,
		[5, 20, 40, 65].map((min) => temp(min, 20))
	);
	expect(found.map(({ hourMs, stay, fieldMg }) => [hourMs / HOUR_MS, stay, fieldMg[0]])).toEqual([
		[0, null, 1],
		[0, 'a', 200],
		[0, 'b', 300],
		[1, null, 2]
	]);
});

test('the median stands against one wild row', () => {
	const [hour] = hourRecords([row(1, 10), row(2, 11), row(3, 500)], [temp(2, 20)]);
	expect(hour!.fieldMg[0]).toBe(11);
});
