import { z } from 'zod';
import { changeId, code, instant, instantIn, list, mg, serial, vectorMg } from './common';
import { featureCollectionIn, polygon } from './geojson';

export const STATES = ['vacant', 'occupied', 'unknown'] as const;
export const CONDITIONS = [
	'withdrawn',
	'unplaced',
	'learning',
	'silent',
	'inverted',
	'clipped',
	'refresh_due',
	'drifting',
	'in_service'
] as const;

export const state = z.enum(STATES);
export const condition = z.enum(CONDITIONS);

const confidence = z
	.number()
	.min(0)
	.max(1)
	.nullable()
	.meta({ description: 'Steps of 0.05 with hysteresis; null when unknown.' });

export const bayView = z.strictObject({
	code,
	zone: code,
	state,
	since: instant.nullable(),
	confidence,
	doubt: z.strictObject({ reason: z.string(), since: instant }).nullable(),
	condition,
	also: z.array(z.string()).meta({ description: 'Other conditions and marks that hold.' }),
	lastKnown: z.strictObject({ state, at: instant }).nullable(),
	closed: z.strictObject({ from: instant, to: instant, reason: z.string() }).nullable(),
	node: serial.nullable()
});
export type BayView = z.infer<typeof bayView>;

export const removedBay = z.strictObject({ code, removed: z.literal(true) });

export const bayList = list(z.union([bayView, removedBay]), {
	changes: changeId.meta({ description: 'Cursor for the next poll: ?changes=' })
});

export const bayIn = z.strictObject({
	code,
	zone: code,
	geometry: polygon.nullable().optional(),
	personal: z.boolean().optional()
});
export type BayIn = z.infer<typeof bayIn>;

export const baysIn = z.union([z.array(bayIn).min(1).max(5000), featureCollectionIn]);

export const bayPatch = z
	.strictObject({ code, zone: code, geometry: polygon.nullable(), personal: z.boolean() })
	.partial();
export type BayPatch = z.infer<typeof bayPatch>;

export const nodeReport = z.strictObject({
	serial,
	heardAt: instant.nullable(),
	fieldMg: vectorMg.nullable(),
	baselineMg: vectorMg.nullable(),
	disturbanceMg: mg.nullable(),
	onMg: mg.nullable(),
	offMg: mg.nullable(),
	tempC: z.number().nullable(),
	batteryMv: z.int().nullable()
});

export const bayDetail = z.strictObject({
	...bayView.shape,
	personal: z.boolean(),
	geometry: polygon.nullable(),
	evidence: z.strictObject({ because: z.array(z.string()), against: z.array(z.string()) }),
	report: nodeReport.nullable().meta({ description: "The node's own report as last heard." })
});

export const baysCreated = z.strictObject({
	items: z.array(z.strictObject({ code, zone: code })),
	changes: changeId
});

export const settleIn = z.strictObject({
	as: z.enum(['seen_vacant', 'told_vacant', 'seen_occupied']),
	at: instantIn.optional().meta({ description: 'When it was seen; now when left out.' })
});
