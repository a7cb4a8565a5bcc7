import { localMetres } from './local-metres';
import { rowsOf } from './rows';
import type { BayOutline, Box, PlacedBay, PlanLayout, Xy } from './types';

const QUARTER = Math.PI / 2;

/** Lays bays out on the page: metres, turned so that most bays stand square to the sheet. */
export function layOut(outlines: readonly BayOutline[]): PlanLayout {
	const drawn = outlines.filter((bay) => (bay.ring?.length ?? 0) >= 4);
	const undrawn = outlines.filter((bay) => !drawn.includes(bay)).map((bay) => bay.code);
	const all = drawn.flatMap((bay) => bay.ring ?? []);
	const project = localMetres(middle(all.map((p) => p[0])), middle(all.map((p) => p[1])));
	// East-north becomes right-down: y is turned over.
	const flat = drawn.map((bay) =>
		(bay.ring ?? []).slice(0, -1).map(([lon, lat]) => {
			const { x, y } = project(lon, lat);
			return { x, y: -y };
		})
	);
	const turn = pageTurn(flat);
	const turned = flat.map((corners) => corners.map((corner) => rotate(corner, turn)));
	const box = boxOf(turned.flat());
	const bays = drawn.map((bay, at) =>
		placed(
			bay,
			(turned[at] ?? []).map((c) => ({ x: c.x - box.minX, y: c.y - box.minY }))
		)
	);
	const rows = rowsOf(bays);
	const rowOfBay = new Array<number>(bays.length).fill(0);
	rows.forEach((row, at) => row.bays.forEach((bay) => (rowOfBay[bay] = at)));
	return {
		bays,
		rows,
		rowOfBay,
		box: { minX: 0, minY: 0, maxX: box.maxX - box.minX, maxY: box.maxY - box.minY },
		northAngle: turn,
		undrawn
	};
}

function placed(bay: BayOutline, corners: readonly Xy[]): PlacedBay {
	const centre = {
		x: corners.reduce((sum, c) => sum + c.x, 0) / corners.length,
		y: corners.reduce((sum, c) => sum + c.y, 0) / corners.length
	};
	const longAngle = longSideAngle(corners);
	const along = corners.map((c) => rotate(c, -longAngle));
	const { minX, maxX, minY, maxY } = boxOf(along);
	return {
		code: bay.code,
		zone: bay.zone,
		corners,
		centre,
		longM: maxX - minX,
		shortM: maxY - minY,
		longAngle
	};
}

/** Direction of the longest side, in [0, π). */
function longSideAngle(corners: readonly Xy[]): number {
	let [longest, angle] = [-1, 0];
	corners.forEach((a, at) => {
		const b = corners[(at + 1) % corners.length] ?? a;
		const length = Math.hypot(b.x - a.x, b.y - a.y);
		if (length > longest + 0.01) [longest, angle] = [length, Math.atan2(b.y - a.y, b.x - a.x)];
	});
	return ((angle % Math.PI) + Math.PI) % Math.PI;
}

/**
 * The turn of the sheet: bays square to it (mean of fourfold angles), north in its upper half, and of
 * those the one whose drawing is broad rather than tall; nearly square ones keep north nearest to up.
 */
function pageTurn(flat: readonly (readonly Xy[])[]): number {
	if (flat.length === 0) return 0;
	const [sin, cos] = flat.reduce(
		([s, c], corners) => {
			const angle = longSideAngle(corners);
			return [s + Math.sin(4 * angle), c + Math.cos(4 * angle)];
		},
		[0, 0]
	);
	const square = -Math.atan2(sin, cos) / 4;
	const candidates = [square, square + QUARTER, square - QUARTER].filter(
		(turn) => Math.abs(turn) <= QUARTER + 1e-9
	);
	const points = flat.flat();
	const cost = (turn: number) => {
		const box = boxOf(points.map((p) => rotate(p, turn)));
		const tall = (box.maxY - box.minY) / Math.max(1, box.maxX - box.minX);
		return (tall > 1.15 ? 10 : 0) + Math.abs(turn);
	};
	return candidates.reduce((best, turn) => (cost(turn) < cost(best) ? turn : best), square);
}

/** Turned clockwise on the page (y down) by an angle in radians. */
export function rotate(p: Xy, angle: number): Xy {
	const [sin, cos] = [Math.sin(angle), Math.cos(angle)];
	return { x: p.x * cos - p.y * sin, y: p.x * sin + p.y * cos };
}

export function boxOf(points: readonly Xy[]): Box {
	const box = { minX: Infinity, minY: Infinity, maxX: -Infinity, maxY: -Infinity };
	for (const { x, y } of points) {
		box.minX = Math.min(box.minX, x);
		box.maxX = Math.max(box.maxX, x);
		box.minY = Math.min(box.minY, y);
		box.maxY = Math.max(box.maxY, y);
	}
	return points.length === 0 ? { minX: 0, minY: 0, maxX: 0, maxY: 0 } : box;
}

function middle(values: readonly number[]): number {
	let [least, most] = [Infinity, -Infinity];
	for (const value of values) [least, most] = [Math.min(least, value), Math.max(most, value)];
	return values.length === 0 ? 0 : (least + most) / 2;
}
