import { z } from 'zod';
import { instant, serial } from './v1/common';

/** What the sheet of parameters and the dossier's part read and write (routes below /api/desk). */

const override = z.strictObject({
	id: z.int(),
	value: z.number(),
	since: instant,
	by: z.string().nullable(),
	why: z.string()
});

export const parameterItem = z.strictObject({
	name: z.string(),
	part: z.enum(['detection', 'drift']),
	unit: z.string().meta({ description: "'1' = a ratio." }),
	min: z.number(),
	max: z.number(),
	defaultValue: z.number(),
	/** Why the default stands where it does. */
	reason: z.string(),
	/** In force, and where it comes from. */
	value: z.number(),
	source: z.enum(['default', 'site', 'node']),
	site: override.nullable(),
	node: override.nullable()
});
export type ParameterItem = z.infer<typeof parameterItem>;

export const parameterChange = z.strictObject({
	id: z.int(),
	name: z.string(),
	/** null: the whole site. */
	node: serial.nullable(),
	bay: z.string().nullable(),
	value: z.number(),
	from: instant,
	until: instant.nullable(),
	by: z.string().nullable(),
	why: z.string(),
	endedBy: z.string().nullable(),
	endedWhy: z.string().nullable(),
	/** Nothing changed it since: it can be undone. */
	undo: z.boolean()
});
export type ParameterChange = z.infer<typeof parameterChange>;

export const parameterSheet = z.strictObject({
	node: serial.nullable(),
	items: z.array(parameterItem),
	/** Newest first, at most 500; with a node only those of the site and of that node. */
	changes: z.array(parameterChange)
});
export type ParameterSheet = z.infer<typeof parameterSheet>;

export const parameterQuery = z.strictObject({ node: serial.optional() });

export const parameterIn = z.strictObject({
	name: z.string().min(1).max(64),
	/** null: back to what the site, or the default, says. */
	value: z.number('must be a number').nullable(),
	/** Left out: the whole site. */
	node: serial.optional(),
	why: z
		.string()
		.trim()
		.min(1, 'say why: those who come after you will ask')
		.max(400, 'at most 400 characters')
});
export type ParameterIn = z.infer<typeof parameterIn>;

/** How a node's quiet field stands to the Earth's (method 8). */
export const earthCheck = z.strictObject({
	/** null: nothing learned yet. */
	learnedAt: instant.nullable(),
	accepted: z.boolean(),
	quietMg: z.number().nullable(),
	/** Total field of the World Magnetic Model at the site's position and the reference's date. */
	earthMg: z.number(),
	horizontalMg: z.number(),
	inclinationDeg: z.number(),
	ratio: z.number().nullable(),
	verdict: z.enum(['agrees', 'off', 'wrong_resolution', 'no_offset', 'not_learned']),
	withinModelYears: z.boolean()
});
export type EarthCheck = z.infer<typeof earthCheck>;
