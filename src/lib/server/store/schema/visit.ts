import {
	boolean,
	index,
	int,
	mysqlEnum,
	mysqlTable,
	primaryKey,
	smallint,
	uniqueIndex,
	varchar
} from 'drizzle-orm/mysql-core';
import { bay } from './bay';
import { atMs } from './columns';
import { person } from './people';
import { site } from './site';

/** 'Send someone': a bay that wants a person on the spot, who has taken it, and what was done there. */
export const visitRequest = mysqlTable(
	'visit_request',
	{
		id: int('id').autoincrement().primaryKey(),
		siteId: int('site_id')
			.notNull()
			.references(() => site.id),
		bayId: int('bay_id')
			.notNull()
			.references(() => bay.id),
		nodeId: int('node_id'),
		reason: varchar('reason', { length: 400 }).notNull(),
		/** null = a rule: a film refresh that failed twice. */
		askedBy: int('asked_by').references(() => person.id),
		askedAtMs: atMs('asked_at_ms').notNull(),
		takenBy: int('taken_by').references(() => person.id),
		takenAtMs: atMs('taken_at_ms'),
		endedBy: int('ended_by').references(() => person.id),
		endedAtMs: atMs('ended_at_ms'),
		/** What was done or found, in words. */
		outcome: varchar('outcome', { length: 400 })
	},
	(t) => [
		index('visit_request_site').on(t.siteId, t.endedAtMs),
		index('visit_request_bay').on(t.bayId)
	]
);

/** Why a bay wants a person: what a rule saw, a failed film refresh, a swap found necessary, or a wish. */
export const VISIT_CAUSES = [
	'not_cured',
	'silent',
	'clipped',
	'low_cell',
	'swap',
	'by_hand'
] as const;

/** A request's causes, in the order they came; those of rules end by themselves. */
export const visitCause = mysqlTable(
	'visit_cause',
	{
		id: int('id').autoincrement().primaryKey(),
		requestId: int('request_id')
			.notNull()
			.references(() => visitRequest.id),
		cause: mysqlEnum('cause', VISIT_CAUSES).notNull(),
		/** In words, where there are some: the wish of a person, the verdict of a proof. */
		detail: varchar('detail', { length: 400 }).notNull().default(''),
		atMs: atMs('at_ms').notNull(),
		/** It does not hold any more; null = it does. */
		endedAtMs: atMs('ended_at_ms')
	},
	(t) => [index('visit_cause_of').on(t.requestId, t.cause)]
);

/** A walk: several requests of one site, taken together by one person. */
export const visit = mysqlTable(
	'visit',
	{
		id: int('id').autoincrement().primaryKey(),
		siteId: int('site_id')
			.notNull()
			.references(() => site.id),
		/** Who walks; null 90 days after the end (product.md, 'Cautions'). */
		takenBy: int('taken_by').references(() => person.id),
		takenAtMs: atMs('taken_at_ms').notNull(),
		endedAtMs: atMs('ended_at_ms')
	},
	(t) => [
		index('visit_site').on(t.siteId, t.endedAtMs),
		index('visit_person').on(t.takenBy, t.endedAtMs)
	]
);

export const VISIT_OUTCOMES = [
	'cured',
	'cell_changed',
	'node_swapped',
	'obstacle_removed',
	'to_be_swapped',
	'nothing_found',
	'not_reached',
	'other'
] as const;

/** One request in one walk. Ended with an outcome; one that was handed back has none. */
export const visitStop = mysqlTable(
	'visit_stop',
	{
		id: int('id').autoincrement().primaryKey(),
		visitId: int('visit_id')
			.notNull()
			.references(() => visit.id),
		requestId: int('request_id')
			.notNull()
			.references(() => visitRequest.id),
		/** Order of the walk, 1 first. */
		place: smallint('place').notNull(),
		outcome: mysqlEnum('outcome', VISIT_OUTCOMES),
		note: varchar('note', { length: 1000 }).notNull().default(''),
		endedBy: int('ended_by').references(() => person.id),
		/** When it was done there, as the phone said, never after `recorded_at_ms`. */
		endedAtMs: atMs('ended_at_ms'),
		recordedAtMs: atMs('recorded_at_ms')
	},
	(t) => [
		uniqueIndex('visit_stop_once').on(t.visitId, t.requestId),
		index('visit_stop_request').on(t.requestId)
	]
);

export const RECORDING_KINDS = ['tick', 'part', 'outcome', 'note'] as const;

/** What was recorded at a stop, each under the id that the phone made: sent twice it is one. */
export const visitRecording = mysqlTable(
	'visit_recording',
	{
		/** UUID. */
		id: varchar('id', { length: 36 }).primaryKey(),
		stopId: int('stop_id')
			.notNull()
			.references(() => visitStop.id),
		personId: int('person_id').references(() => person.id),
		kind: mysqlEnum('kind', RECORDING_KINDS).notNull(),
		/** A check, a part or an outcome by its code; '' for a note. */
		code: varchar('code', { length: 32 }).notNull().default(''),
		/** Checks: 1 done, 0 not; parts: how many. */
		amount: int('amount').notNull().default(0),
		text: varchar('text', { length: 1000 }).notNull().default(''),
		madeAtMs: atMs('made_at_ms').notNull(),
		takenAtMs: atMs('taken_at_ms').notNull(),
		/** It came when the stop had been closed by somebody else: kept beside, changes nothing. */
		added: boolean('added').notNull().default(false)
	},
	(t) => [index('visit_recording_stop').on(t.stopId, t.madeAtMs)]
);

/** A picture taken at a stop; its files lie under LODEKEEP_DATA/photos by `file`, never by a name sent. */
export const visitPhoto = mysqlTable(
	'visit_photo',
	{
		/** UUID, made by the phone. */
		id: varchar('id', { length: 36 }).primaryKey(),
		stopId: int('stop_id')
			.notNull()
			.references(() => visitStop.id),
		personId: int('person_id').references(() => person.id),
		/** 32 hex digits; null once removed. */
		file: varchar('file', { length: 32 }),
		/** SHA-256 of what was sent, hex: the same id with other bytes is refused. */
		sentSha256: varchar('sent_sha256', { length: 64 }).notNull(),
		widthPx: smallint('width_px').notNull(),
		heightPx: smallint('height_px').notNull(),
		sizeBytes: int('size_bytes').notNull(),
		madeAtMs: atMs('made_at_ms').notNull(),
		takenAtMs: atMs('taken_at_ms').notNull(),
		added: boolean('added').notNull().default(false)
	},
	(t) => [
		index('visit_photo_stop').on(t.stopId, t.madeAtMs),
		index('visit_photo_file').on(t.file),
		index('visit_photo_taken').on(t.takenAtMs)
	]
);

/** How to get to the nodes of a site. Keys and contact are shown to maintenance and admins only. */
export const siteAccess = mysqlTable('site_access', {
	siteId: int('site_id')
		.primaryKey()
		.references(() => site.id),
	parking: varchar('parking', { length: 1000 }).notNull().default(''),
	wayIn: varchar('way_in', { length: 1000 }).notNull().default(''),
	keysAt: varchar('keys_at', { length: 1000 }).notNull().default(''),
	contact: varchar('contact', { length: 1000 }).notNull().default(''),
	/** Raised with every change: who writes says which they saw. */
	version: int('version').notNull().default(1),
	changedAtMs: atMs('changed_at_ms').notNull()
});

/** A permit to work at a site, good up to and including a local day. */
export const sitePermit = mysqlTable(
	'site_permit',
	{
		siteId: int('site_id')
			.notNull()
			.references(() => site.id),
		place: smallint('place').notNull(),
		name: varchar('name', { length: 120 }).notNull(),
		number: varchar('number', { length: 64 }).notNull().default(''),
		/** 'YYYY-MM-DD', the last day it is good on; null = without an end. */
		lastDay: varchar('last_day', { length: 10 })
	},
	(t) => [primaryKey({ columns: [t.siteId, t.place] })]
);
