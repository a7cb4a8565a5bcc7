import { z } from 'zod';

/** Codes and slugs (api.md, 'Conventions'). */
export const code = z
	.string()
	.regex(/^[A-Za-z0-9._-]{1,32}$/, 'must be 1 to 32 of A-Z, a-z, 0-9, dot, underscore, hyphen')
	.meta({ description: 'A code or slug.' });

export const serial = z
	.string()
	.regex(/^[A-Z0-9-]{4,32}$/, 'must be 4 to 32 of A-Z, 0-9, hyphen')
	.meta({ description: "A node's serial; also its MQTT client id and user name." });

/** RFC 3339 with an offset in a request; read as UTC milliseconds. */
export const instantIn = z.iso
	.datetime({ offset: true, error: 'must be RFC 3339 with Z or an offset' })
	.meta({ description: 'RFC 3339 with Z or an offset.' })
	.transform((text) => Date.parse(text));

/** RFC 3339 in UTC with milliseconds in an answer. */
export const instant = z.iso.datetime({ precision: 3 });

/** An id of the site's change log. */
export const changeId = z.int().min(0).meta({ description: "An id of the site's change log." });
export const changeIdIn = z.coerce
	.number('must be an id of the change log')
	.int()
	.min(0)
	.max(Number.MAX_SAFE_INTEGER);

export const flagIn = z
	.enum(['true', 'false'], 'must be true or false')
	.transform((text) => text === 'true');

export const cursorIn = z
	.string()
	.max(400)
	.meta({ description: '`next` of the page before; opaque.' });

export const limitIn = (fallback: number) =>
	z.coerce
		.number('must be a whole number')
		.int()
		.min(1)
		.max(1000, 'must be at most 1000')
		.default(fallback);

/** Query parameters of every list. */
export const page = { limit: limitIn(200), cursor: cursorIn.optional() };

/** `{items, next}`; `extra` holds what a list says besides. */
export const list = <T extends z.ZodType, E extends z.ZodRawShape>(item: T, extra: E) =>
	z.strictObject({
		items: z.array(item),
		next: z.string().nullable().meta({ description: 'Cursor of the next page; null at the end.' }),
		...extra
	});

export const mg = z.number().meta({ description: 'Milligauss; 1 mG = 100 nT.' });
export const vectorMg = z
	.tuple([mg, mg, mg])
	.meta({ description: "Field in the node's own axes x, y, z, in mG." });

/** RFC 9457. */
export const problem = z.object({
	type: z.string(),
	title: z.string(),
	status: z.int(),
	detail: z.string().optional(),
	instance: z.string().optional(),
	errors: z.array(z.strictObject({ pointer: z.string(), detail: z.string() })).optional()
});
export type ProblemBody = z.infer<typeof problem>;

export const acted = z.strictObject({
	act: z.int().meta({ description: 'The id of what was done.' }),
	outcome: z.string().nullable().meta({
		description: "'done'; null when the pipeline had not taken it after 2 s (status 202)."
	})
});
