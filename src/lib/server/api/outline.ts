import { z } from 'zod';

const polygon = z.object({
	type: z.literal('Polygon'),
	coordinates: z.array(z.array(z.array(z.number()).min(2))).min(1)
});
const round = (deg: number) => Math.round(deg * 1e8) / 1e8;

/** The exterior ring of a stored GeoJSON polygon, to 8 decimals of a degree (about 1 mm). */
export function ringOf(geometry: string | null): [number, number][] | null {
	if (geometry === null) return null;
	const parsed = polygon.safeParse(JSON.parse(geometry));
	const ring = parsed.success ? parsed.data.coordinates[0] : undefined;
	return ring?.map(([lon, lat]) => [round(lon ?? 0), round(lat ?? 0)]) ?? null;
}
