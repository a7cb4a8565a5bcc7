import { expect, test } from 'vitest';
import type { DriftRow } from '$lib/schemas/desk-drift';
import { arrowScaleMg, arrowsOf, SCALE_PX, tipOf, type DriftArrow } from './drift-arrows';
import { layOut } from './layout';

const arrow = (lengthMg: number, bearingDeg: number | null = null): DriftArrow => ({
	...{ bay: 0, lengthMg, bearingDeg, downMg: null }
});

test('the scale goes in 1-2-5 steps, the longest arrow being at most twice as long', () => {
	for (const [longest, scale] of [
		[0, 5],
		[9, 5],
		[12, 10],
		[21, 20],
		[40, 20],
		[41, 50],
		[150, 100],
		[260, 200]
	] as const) {
		expect(arrowScaleMg([arrow(longest)]), `${longest} mG`).toBe(scale);
	}
});

test('without a heading an arrow stands straight up the sheet, however the sheet is turned', () => {
	const tip = tipOf({ x: 100, y: 100 }, arrow(20), 20, 1.1);
	expect(tip.x).toBeCloseTo(100, 9);
	expect(tip.y).toBeCloseTo(100 - SCALE_PX, 9);
});

test('with a heading it lies in the plan: east is right of north, and turns with the sheet', () => {
	const east = tipOf({ x: 0, y: 0 }, arrow(20, 90), 20, 0);
	expect([east.x, east.y]).toEqual([expect.closeTo(SCALE_PX, 9), expect.closeTo(0, 9)]);
	// North turned a quarter clockwise points right: east then points down.
	const turned = tipOf({ x: 0, y: 0 }, arrow(10, 90), 20, Math.PI / 2);
	expect([turned.x, turned.y]).toEqual([expect.closeTo(0, 9), expect.closeTo(SCALE_PX / 2, 9)]);
});

const ring = [
	[0, 0],
	[0.00002, 0],
	[0.00002, 0.00004],
	[0, 0.00004],
	[0, 0]
] as const;
const layout = layOut([
	{ code: 'A-1', zone: 'A', ring },
	{ code: 'A-2', zone: 'A', ring }
]);
const limits = { driftingMg: 10, refreshMg: 16, refreshHours: 6 };
const row = (bay: string, sureMg: number, bearingDeg: number | null): DriftRow =>
	({
		...{ bay, sureMg, drifting: null, refresh: { due: false, reasons: [] } },
		arrow: { fieldMg: [3, 4, 12], lengthMg: 13, levelMg: 5, bearingDeg, downMg: 12 }
	}) as unknown as DriftRow;

test('by default only nodes past the drifting limit have one; bays that are not drawn never', () => {
	const rows = [row('A-1', 11, null), row('A-2', 9, null), row('Z-9', 30, null)];
	expect(arrowsOf(rows, layout, 'past', limits).map(({ bay }) => bay)).toEqual([0]);
	expect(arrowsOf(rows, layout, 'all', limits).map(({ bay }) => bay)).toEqual([0, 1]);
	expect(arrowsOf(rows, layout, 'none', limits)).toEqual([]);
});

test('with a heading the level part lies in the plan and the vertical part is written beside it', () => {
	expect(arrowsOf([row('A-1', 11, null)], layout, 'past', limits)).toEqual([
		{ bay: 0, lengthMg: 13, bearingDeg: null, downMg: null }
	]);
	expect(arrowsOf([row('A-1', 11, 30)], layout, 'past', limits)).toEqual([
		{ bay: 0, lengthMg: 5, bearingDeg: 30, downMg: 12 }
	]);
});
