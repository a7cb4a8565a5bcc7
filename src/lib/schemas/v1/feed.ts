import { z } from 'zod';
import {
	changeId,
	changeIdIn,
	code,
	cursorIn,
	flagIn,
	instant,
	instantIn,
	limitIn,
	list,
	page,
	serial
} from './common';
import { state } from './bays';

export const eventView = z.strictObject({
	id: changeId,
	bay: code,
	type: z.enum(['arrival', 'departure', 'unknown', 'known', 'settled', 'voided']),
	state,
	at: instant,
	recordedAt: instant,
	confidence: z.number().nullable(),
	uncertaintyS: z.number(),
	late: z.boolean(),
	voids: changeId.optional().meta({ description: 'The event that did not happen.' })
});
export type EventView = z.infer<typeof eventView>;

const range = { from: instantIn.optional(), to: instantIn.optional() };

export const eventQuery = z.strictObject({
	after: changeIdIn.optional(),
	...range,
	bay: code.optional(),
	effective: flagIn.optional(),
	...page
});
export const eventList = list(eventView, {
	changes: changeId.meta({ description: 'Everything up to this id was looked at: ?after=' })
});

export const changeView = z.strictObject({
	id: changeId,
	kind: z.enum(['event', 'bay', 'condition', 'geometry', 'closure', 'removed', 'site']),
	bay: code.nullable(),
	node: serial.nullable(),
	recordedAt: instant,
	event: eventView.optional()
});
export const changeQuery = z.strictObject({
	after: changeIdIn.default(0),
	limit: limitIn(200),
	cursor: cursorIn.optional()
});
export const changeList = list(changeView, {
	changes: changeId.meta({ description: 'The newest id of the unbroken run: ?after=' })
});

export const stayQuery = z.strictObject({ ...range, bay: code.optional(), ...page });
export const stayView = z.strictObject({
	bay: code,
	from: instant,
	to: instant.nullable(),
	end: z.enum(['departure', 'unknown']).nullable()
});
export type StayView = z.infer<typeof stayView>;
export const stayList = list(stayView, {});

export const closureIn = z
	.strictObject({
		bays: z.array(code).min(1).max(5000).optional(),
		zone: code.optional(),
		from: instantIn,
		to: instantIn,
		reason: z.string().trim().min(1).max(400)
	})
	.refine((c) => (c.bays === undefined) !== (c.zone === undefined), {
		message: 'give either bays or zone',
		path: ['bays']
	})
	.refine((c) => c.to > c.from, { message: 'must lie after from', path: ['to'] });
export type ClosureIn = z.infer<typeof closureIn>;

export const closureView = z.strictObject({
	id: z.int(),
	bay: code,
	from: instant,
	to: instant,
	reason: z.string(),
	liftedAt: instant.nullable()
});
export const closureList = list(closureView, {});
export const closuresMade = z.strictObject({
	items: z.array(closureView),
	outcome: z.string().nullable()
});
