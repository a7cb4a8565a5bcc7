import { z } from 'zod';
import { condition } from './bays';
import {
	code,
	cursorIn,
	flagIn,
	instant,
	instantIn,
	list,
	mg,
	page,
	serial,
	vectorMg
} from './common';

const nodeKey = z
	.string()
	.regex(/^[0-9a-fA-F]{64}$/, 'must be 64 hex digits')
	.meta({ description: '32 bytes as 64 hex digits.' });

export const nodeIn = z.strictObject({
	serial,
	bay: code.optional(),
	profile: code,
	key: nodeKey.optional(),
	gateway: z.string().min(1).max(64).optional(),
	preCommissioned: z.boolean().default(false),
	unsignedAllowed: z.boolean().default(false)
});
export type NodeIn = z.infer<typeof nodeIn>;
export const nodesIn = z.array(nodeIn).min(1).max(1000);

/** Shown this once. */
export const nodeSecret = z.strictObject({ serial, key: nodeKey, mqttPassword: z.string() });
export const nodesCreated = z.strictObject({ items: z.array(nodeSecret) });

export const nodeSummary = z.strictObject({
	serial,
	site: code,
	bay: code.nullable(),
	profile: code,
	gateway: z.string().nullable(),
	condition,
	also: z.array(z.string()),
	preCommissioned: z.boolean(),
	unsignedAllowed: z.boolean(),
	firmware: z.string().nullable(),
	heardAt: instant.nullable(),
	placedAt: instant.nullable(),
	withdrawnAt: instant.nullable()
});
export const nodeList = list(nodeSummary, {});

export const nodeDetail = z.strictObject({
	...nodeSummary.shape,
	periodS: z.int(),
	deltaMg: z.int(),
	headingDeg: z.number().nullable(),
	eastM: z.number().nullable(),
	northM: z.number().nullable(),
	reading: z
		.strictObject({
			at: instant,
			fieldMg: vectorMg.meta({ description: 'Counts over the scale, polarity taken out.' }),
			tempC: z.number().nullable(),
			batteryMv: z.int().nullable(),
			clipped: z.boolean()
		})
		.nullable(),
	reference: z
		.strictObject({
			learnedAt: instant,
			fieldMg: vectorMg,
			sigmaMg: mg,
			tempC: z.number().nullable(),
			acceptedAt: instant.nullable(),
			provisional: z.boolean()
		})
		.nullable(),
	offsetMg: vectorMg.nullable().meta({ description: 'Offset in use; null before the first pair.' }),
	keyOverlapUntil: instant.nullable()
});

export const nodePatch = z
	.strictObject({
		profile: code,
		gateway: z.string().min(1).max(64).nullable(),
		headingDeg: z.number().min(0).max(360).nullable(),
		eastM: z.number().min(-100_000).max(100_000).nullable(),
		northM: z.number().min(-100_000).max(100_000).nullable(),
		unsignedAllowed: z.boolean()
	})
	.partial();
export type NodePatch = z.infer<typeof nodePatch>;

export const keyIn = z.strictObject({
	key: nodeKey.optional(),
	overlapS: z
		.int()
		.min(0)
		.max(30 * 86_400)
		.default(7 * 86_400)
});
export const keyMade = z.strictObject({
	...nodeSecret.shape,
	oldKeyUntil: instant
});

export const placeIn = z.strictObject({
	bay: code,
	at: instantIn.optional().meta({
		description: 'Since when the node lies there (at most 14 days ago); now when left out.'
	})
});
export const acceptIn = z.strictObject({
	seenEmpty: z.boolean().meta({
		description: 'true: somebody sees the bay empty now; false: by rule, provisional.'
	})
});
export const withdrawIn = z.strictObject({ reason: z.string().trim().min(1).max(400).optional() });

export const readingQuery = z.strictObject({
	from: instantIn.optional(),
	to: instantIn.optional(),
	points: z.coerce.number().int().min(2).max(5000).default(500),
	raw: flagIn.optional(),
	limit: page.limit,
	cursor: cursorIn.optional()
});

const axes = { x: mg, y: mg, z: mg };
export const rawReading = z.strictObject({
	at: instant,
	boot: z.int(),
	seq: z.int(),
	row: z.int(),
	...axes,
	polarity: z.union([z.literal(1), z.literal(-1)]),
	tempC: z.number().nullable(),
	batteryMv: z.int().nullable(),
	rssiDbm: z.int().nullable(),
	clipped: z.boolean()
});
const bucketed = z.strictObject({ min: vectorMg, max: vectorMg, mean: vectorMg });
export const readingBucket = z.strictObject({
	at: instant.meta({ description: 'Begin of the bucket.' }),
	n: z.int(),
	...bucketed.shape,
	tempC: z.number().nullable()
});
export const readingList = list(z.union([readingBucket, rawReading]), {
	bucketMs: z.int().nullable().meta({ description: 'Width of a bucket; null: single readings.' })
});
