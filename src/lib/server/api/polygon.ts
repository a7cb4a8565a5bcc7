import type { Polygon } from '$lib/schemas/v1/geojson';

type Position = readonly number[];

/** Twice the signed area in square degrees; positive = counter-clockwise (right-hand rule). */
function doubleArea(ring: readonly Position[]): number {
	let sum = 0;
	for (let i = 0; i + 1 < ring.length; i++) {
		const [x0 = 0, y0 = 0] = ring[i] ?? [];
		const [x1 = 0, y1 = 0] = ring[i + 1] ?? [];
		sum += x0 * y1 - x1 * y0;
	}
	return sum;
}

/**
 * As it is stored: the exterior ring counter-clockwise (RFC 7946, 3.1.6: writers follow the rule,
 * readers do not insist on it), heights left out, seven decimals (about 1 cm).
 */
export function normalPolygon(p: Polygon): Polygon {
	const coordinates = p.coordinates.map((ring) => {
		const flat = ring.map(([lon = 0, lat = 0]) => [round7(lon), round7(lat)]);
		return doubleArea(flat) < 0 ? flat.reverse() : flat;
	});
	return { type: 'Polygon', coordinates };
}

const round7 = (degrees: number): number => Math.round(degrees * 1e7) / 1e7;
