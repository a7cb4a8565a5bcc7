import { describe, expect, test } from 'vitest';
import type { Vec3 } from '$lib/magnetics/vector';
import { nodeHour, type RawRow } from './node-hour';
import { stillRows } from './still';
import { stretchesOf, without } from './stretches';

const HOUR = 3_600_000;
const MIN = 60_000;
const HOUR_SPAN = { fromMs: HOUR, toMs: 2 * HOUR };
const O: Vec3 = [10, -20, 30];
const rows = (n: number, rawMg: (i: number) => Vec3, fromMs = HOUR): RawRow[] =>
	Array.from({ length: n }, (_, i) => ({
		...{ atMs: fromMs + i * MIN, rawMg: rawMg(i), polarity: 1 as const, tempC: 20 }
	}));

describe('stretches', () => {
	test('begin and end with the hour, 10 s away from a change of state', () => {
		const entries = [
			{ atMs: 0, state: 'vacant' as const },
			{ atMs: HOUR + 30 * MIN, state: 'occupied' as const }
		];
		expect(stretchesOf(entries, HOUR_SPAN)).toEqual([
			{ fromMs: HOUR, toMs: HOUR + 30 * MIN - 10_000, stay: null },
			{ fromMs: HOUR + 30 * MIN + 10_000, toMs: 2 * HOUR, stay: String(HOUR / 1000 + 1800) }
		]);
	});

	test('of an unknown state are left out', () => {
		expect(stretchesOf([{ atMs: 0, state: 'unknown' }], HOUR_SPAN)).toEqual([]);
	});

	test('a stay keeps its name when it is confirmed', () => {
		const entries = [
			{ atMs: HOUR - 5000, state: 'occupied' as const },
			{ atMs: HOUR + MIN, state: 'occupied' as const }
		];
		const names = stretchesOf(entries, HOUR_SPAN).map(({ stay }) => stay);
		expect(new Set(names)).toEqual(new Set([String(HOUR / 1000 - 5)]));
	});

	test('a closure cuts them', () => {
		const whole = [{ fromMs: 0, toMs: 100, stay: null }];
		expect(without(whole, [{ fromMs: 40, toMs: 60 }])).toEqual([
			{ fromMs: 0, toMs: 40, stay: null },
			{ fromMs: 60, toMs: 100, stay: null }
		]);
	});
});

describe('still rows', () => {
	const at = (values: number[]) => values.map((x, i) => ({ atMs: i, fieldMg: [x, 0, 0] as Vec3 }));

	test('leave out those on the way between two levels', () => {
		const still = stillRows(at([0, 0.5, 0, 0.4, 60, 130, 200, 200.4, 200, 200.5]));
		expect(still.map(({ fieldMg }) => fieldMg[0])).toEqual([
			0, 0.5, 0, 0.4, 200, 200.4, 200, 200.5
		]);
	});

	test('two readings alone are not still', () => {
		expect(stillRows(at([1, 1]))).toEqual([]);
	});
});

describe('an hour of a node', () => {
	const vacant = [{ fromMs: HOUR, toMs: 2 * HOUR, stay: null }];

	test('is the median field with the offset taken out', () => {
		const hour = nodeHour(
			HOUR,
			rows(60, (i) => [110 + (i % 3), 80, 430]),
			vacant,
			O
		);
		// 110, 111, 112 by turns: median 111; less O.
		expect(hour).toMatchObject({ fieldMg: [101, 100, 400], offsetMg: O, tempC: 20, n: 60 });
	});

	test('is that of the empty bay where there is one', () => {
		const two = [
			{ fromMs: HOUR, toMs: HOUR + 50 * MIN, stay: '3600' },
			{ fromMs: HOUR + 50 * MIN, toMs: 2 * HOUR, stay: null }
		];
		const hour = nodeHour(
			HOUR,
			rows(60, (i) => (i < 50 ? [300, 0, 0] : [100, 0, 0])),
			two,
			[0, 0, 0]
		);
		expect(hour).toMatchObject({ stay: null, n: 10, fieldMg: [100, 0, 0] });
	});

	test('a field read after RESET is turned round: B = p (r - O)', () => {
		const after = rows(60, () => [-90, -120, -370]).map((r) => ({ ...r, polarity: -1 as const }));
		expect(nodeHour(HOUR, after, vacant, O)?.fieldMg).toEqual([100, 100, 400]);
	});

	test('with two readings says nothing', () => {
		expect(
			nodeHour(
				HOUR,
				rows(2, () => [1, 2, 3]),
				vacant,
				O
			)
		).toBeNull();
	});
});
