import { expect, test } from 'vitest';
import { nearestBays } from './nearest';

/** Bays 0.001° of longitude apart on the equator: 111.32 m (1° on WGS 84 is 111,320 m, published). */
const bay = (code: string, lon: number) => ({
	code,
	zone: 'z',
	ring: [
		[lon - 1e-5, -1e-5],
		[lon + 1e-5, -1e-5],
		[lon + 1e-5, 1e-5],
		[lon - 1e-5, 1e-5],
		[lon - 1e-5, -1e-5]
	] as [number, number][]
});

test('the eight nearest bays stand in order of distance; undrawn ones are left out', () => {
	const outlines = Array.from({ length: 12 }, (_, at) => bay(`B${at}`, at * 0.001));
	const near = nearestBays(
		[{ code: 'U', zone: 'z', ring: null }, ...outlines],
		{ lonDeg: 0.0051, latDeg: 0 },
		8
	);
	expect(near.map(({ code }) => code)).toEqual(['B5', 'B6', 'B4', 'B7', 'B3', 'B8', 'B2', 'B9']);
	expect(near[0]?.distanceM).toBeCloseTo(11.13, 1);
	expect(near[1]?.distanceM).toBeCloseTo(100.19, 1);
});
