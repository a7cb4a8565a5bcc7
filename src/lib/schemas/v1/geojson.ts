import { z } from 'zod';

/** RFC 7946: [longitude, latitude], the height (which Lodekeep drops) allowed. */
const position = z
	.array(z.number())
	.min(2, 'a position is [longitude, latitude]')
	.max(3)
	.refine(([lon = 0, lat = 0]) => Math.abs(lon) <= 180 && Math.abs(lat) <= 90, {
		message: 'longitude (-180 to 180) comes first, then latitude (-90 to 90)'
	});

const ring = z
	.array(position)
	.min(4, 'a ring has at least four positions')
	.max(200)
	.refine((r) => JSON.stringify(r[0]) === JSON.stringify(r.at(-1)), {
		message: 'the first and the last position of a ring must be the same'
	});

/** One bay's outline. Winding is put right, not refused (RFC 7946, 3.1.6). */
export const polygon = z.strictObject({
	type: z.literal('Polygon'),
	coordinates: z.array(ring).min(1, 'a polygon needs a ring').max(1, 'a bay has no holes')
});
export type Polygon = z.infer<typeof polygon>;

export const featureIn = z.object({
	type: z.literal('Feature'),
	id: z.union([z.string(), z.number()]).optional(),
	geometry: polygon.nullable(),
	properties: z.object({
		code: z.string().optional(),
		zone: z.string(),
		personal: z.boolean().optional()
	})
});

export const featureCollectionIn = z.object({
	type: z.literal('FeatureCollection'),
	features: z.array(featureIn).min(1).max(5000)
});

export const featureCollection = z.object({
	type: z.literal('FeatureCollection'),
	features: z.array(
		z.object({
			type: z.literal('Feature'),
			id: z.string(),
			geometry: polygon.nullable(),
			properties: z.record(z.string(), z.unknown())
		})
	),
	next: z.string().nullable(),
	changes: z.int()
});
