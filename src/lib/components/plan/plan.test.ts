import { describe, expect, test } from 'vitest';
import { layOut } from './layout';
import { localMetres } from './local-metres';
import type { BayOutline } from './types';
import { nextOf, nextThatWay, rowEnd, typedBay } from './steps';
import { fit, panned, stepM, toPage, toScreen, zoomAt } from './view';

/** Two back-to-back rows of `n` bays 2.5 m by 5 m, turned by `deg` clockwise from north-up, at 52° N. */
function twoRows(n: number, deg: number): BayOutline[] {
	const [sin, cos] = [Math.sin((deg * Math.PI) / 180), Math.cos((deg * Math.PI) / 180)];
	const point = (x: number, y: number): [number, number] => [
		10 + (x * cos + y * sin) / 68_677.6,
		52 + (-x * sin + y * cos) / 111_266.5
	];
	return [0, 1].flatMap((row) =>
		Array.from({ length: n }, (_, at) => {
			const [x, y] = [at * 2.5, row * 5];
			const ring = [
				point(x, y),
				point(x + 2.5, y),
				point(x + 2.5, y + 5),
				point(x, y + 5),
				point(x, y)
			];
			return { code: `${row === 0 ? 'A' : 'B'}${at + 1}`, zone: 'north', ring };
		})
	);
}

test('a degree at 52° N is 68.68 km east and 111.27 km north', () => {
	// Lengths of a degree on WGS 84 from widely published tables [M]: 111 267 m and 68 678 m at 52°.
	const at = localMetres(10, 52)(11, 53);
	expect(Math.abs(at.x - 68_678)).toBeLessThan(3);
	expect(Math.abs(at.y - 111_267)).toBeLessThan(3);
	expect(localMetres(179.9, 0)(-179.9, 0).x).toBeCloseTo(localMetres(0, 0)(0.2, 0).x, 6);
});

describe.each([0, 17, -30, 80])('bays turned by %d°', (deg) => {
	const layout = layOut(twoRows(12, deg));
	test('stand square to the sheet with their true size', () => {
		for (const bay of layout.bays) {
			const off = bay.longAngle % (Math.PI / 2);
			expect(Math.min(off, Math.PI / 2 - off)).toBeLessThan(0.01);
			expect(bay.shortM).toBeCloseTo(2.5, 1);
			expect(bay.longM).toBeCloseTo(5, 1);
		}
	});
	test('make a broad drawing, with north in its upper half', () => {
		expect(layout.box.maxX).toBeGreaterThan(layout.box.maxY);
		expect(Math.abs(layout.northAngle)).toBeLessThanOrEqual(Math.PI / 2 + 1e-9);
	});
	test('back to back are two rows in order', () => {
		expect(layout.rows).toHaveLength(2);
		for (const row of layout.rows) {
			const numbers = row.bays.map((at) => Number(layout.bays[at]!.code.slice(1)));
			const rising = [...numbers].sort((a, b) => a - b);
			expect([rising, [...rising].reverse()]).toContainEqual(numbers);
			expect(new Set(row.bays.map((at) => layout.bays[at]!.code[0])).size).toBe(1);
		}
	});
});

test('kerbside bays end to end are one row; a bay without geometry is listed, not drawn', () => {
	const ring = (at: number): [number, number][] => [
		[10 + at * 9e-5, 52],
		[10 + at * 9e-5 + 8e-5, 52],
		[10 + at * 9e-5 + 8e-5, 52.00002],
		[10 + at * 9e-5, 52.00002],
		[10 + at * 9e-5, 52]
	];
	const layout = layOut([
		...[0, 1, 2].map((at) => ({ code: `K${at}`, zone: 'kerb', ring: ring(at) })),
		{ code: 'X', zone: 'kerb', ring: null }
	]);
	expect(layout.rows.map((row) => row.bays)).toEqual([[0, 1, 2]]);
	expect(layout.undrawn).toEqual(['X']);
});

test('zooming keeps the point under the pointer; panning never loses the page', () => {
	const size = { width: 800, height: 600 };
	const box = { minX: 0, minY: 0, maxX: 100, maxY: 40 };
	const view = fit(box, size);
	const at = { x: 300, y: 200 };
	const before = toPage(view, at);
	const after = toPage(zoomAt(view, at, 1.7), at);
	expect([after.x, after.y]).toEqual([expect.closeTo(before.x, 9), expect.closeTo(before.y, 9)]);
	const far = panned(view, 1e6, -1e6, box, size);
	expect(toScreen(far, { x: 0, y: 0 }).x).toBeLessThanOrEqual(size.width - 60);
	expect(toScreen(far, { x: 0, y: 40 }).y).toBeGreaterThanOrEqual(60 - 1e-9);
});
test('marks come in steps of 1, 2 and 5', () => {
	expect([stepM(20, 60), stepM(5, 60), stepM(0.5, 60), stepM(100, 60)]).toEqual([5, 20, 200, 1]);
});

test('typed codes are found with or without their hyphen, numbers by themselves', () => {
	const outlines = twoRows(12, 0).map((bay) => ({
		...bay,
		code: bay.code.replace(/(\d+)/, '-0$1')
	}));
	const layout = layOut(outlines);
	const code = (at: number | null) => (at === null ? null : layout.bays[at]!.code);
	expect(['a-03', 'A03', 'b', '7', '-', 'x'].map((typed) => code(typedBay(layout, typed)))).toEqual(
		['A-03', 'A-03', 'B-01', 'A-07', null, null]
	);
});
test('arrows go to the nearest bay that way, ends along the row, needs in a ring', () => {
	const layout = layOut(twoRows(12, 0));
	const code = (at: number | null) => (at === null ? null : layout.bays[at]!.code);
	const a5 = typedBay(layout, 'A5')!;
	expect(
		(['left', 'right', 'up', 'down'] as const).map((way) => code(nextThatWay(layout, a5, way)))
	).toEqual(['A4', 'A6', 'B5', 'A5']);
	expect([code(rowEnd(layout, a5, 'first')), code(rowEnd(layout, a5, 'last'))]).toEqual([
		'A1',
		'A12'
	]);
	expect([
		nextOf([1, 7], 3, 1),
		nextOf([1, 7], 7, 1),
		nextOf([1, 7], 1, -1),
		nextOf([], 0, 1)
	]).toEqual([7, 1, 7, null]);
});
