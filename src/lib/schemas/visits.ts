import { z } from 'zod';
import { spec } from './v1/spec';
import { CHECKS, PARTS, VISIT_OUTCOMES } from './visit-kinds';

/** Stops of a walk: more than a day's work. */
export const WALK_STOPS = 60;

const everyday = ['operator', 'maintenance', 'admin'] as const;
const fitters = ['maintenance', 'admin'] as const;
const id = z.int().positive();
const atMs = z.int().min(0);
const note = (most: number) => z.string().trim().max(most);

/** The last day is written as a calendar shows it; 31 February is none. */
const day = z.iso.date('write the day as YYYY-MM-DD');

export const accessIn = z.strictObject({
	parking: note(1000),
	wayIn: note(1000),
	keysAt: note(1000),
	contact: note(1000),
	permits: z
		.array(
			z.strictObject({
				name: z.string().trim().min(1).max(120),
				number: note(64),
				lastDay: day.nullable()
			})
		)
		.max(20),
	/** The version that the writer saw; 0 where there was none. */
	version: z.int().min(0)
});
export type AccessIn = z.infer<typeof accessIn>;

/** One thing recorded at a stop. `by` is who recorded it: it is taken from nobody else. */
const common = { stop: id, by: id, madeAtMs: atMs };
export const recordingIn = z.discriminatedUnion('kind', [
	z.strictObject({ ...common, kind: z.literal('tick'), code: z.enum(CHECKS), done: z.boolean() }),
	z.strictObject({
		...common,
		kind: z.literal('part'),
		code: z.enum(PARTS),
		count: z.int().min(0).max(99)
	}),
	z.strictObject({ ...common, kind: z.literal('note'), text: note(1000).min(1) }),
	z
		.strictObject({
			...common,
			kind: z.literal('outcome'),
			code: z.enum(VISIT_OUTCOMES),
			text: note(1000)
		})
		.refine(({ code, text }) => code !== 'other' || text !== '', {
			path: ['text'],
			message: 'say in words what it was'
		})
]);
export type RecordingIn = z.infer<typeof recordingIn>;

/** Rules of the routes behind the sheet 'Visits'; no key reaches them. */
export const DESK_VISIT_ROUTES = {
	take: spec({
		summary: 'Take requests into a walk of your own',
		scope: null,
		roles: fitters,
		body: z.strictObject({ requests: z.array(id).min(1).max(WALK_STOPS) }),
		status: 201
	}),
	walk: spec({
		summary: 'One walk: its stops in order, what to load, how to get in',
		scope: null,
		roles: fitters
	}),
	end: spec({
		summary: 'End a walk; stops not seen to go back to the list',
		scope: null,
		roles: fitters,
		body: z.strictObject({}),
		bodyOptional: true
	}),
	record: spec({
		summary: 'Record something at a stop, under an id of your own; twice is once',
		scope: null,
		roles: fitters,
		body: recordingIn
	}),
	photo: spec({ summary: 'A photo of a visit', scope: null, roles: fitters, stamp: 'none' }),
	thumb: spec({
		summary: 'A photo of a visit, small',
		scope: null,
		roles: fitters,
		stamp: 'none'
	}),
	addPhoto: spec({
		summary: 'Send a photo of a stop, under an id of your own; twice is once',
		scope: null,
		roles: fitters,
		query: z.strictObject({
			stop: z.coerce.number().int().positive(),
			by: z.coerce.number().int().positive(),
			at: z.coerce.number().int().min(0)
		})
	}),
	dropPhoto: spec({
		summary: 'Take a photo of your own back',
		scope: null,
		roles: fitters,
		status: 204
	}),
	access: spec({
		summary: 'Change how to get to the nodes of a site',
		scope: null,
		roles: fitters,
		body: accessIn
	}),
	key: spec({
		summary: 'What recordings that wait in this browser are sealed with',
		scope: null,
		roles: fitters,
		stamp: 'none'
	})
} as const;

/** Largest picture that is taken, bytes. */
export const PHOTO_BYTES = 12_000_000;
export { everyday as VISIT_READERS, fitters as FITTERS };
