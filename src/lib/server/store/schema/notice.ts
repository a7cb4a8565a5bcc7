import {
	boolean,
	index,
	int,
	mysqlEnum,
	mysqlTable,
	primaryKey,
	smallint,
	text,
	varchar
} from 'drizzle-orm/mysql-core';
import { bay } from './bay';
import { atMs } from './columns';
import { node } from './node';
import { person } from './people';
import { site } from './site';

/** The most serious first. */
export const NOTICE_KINDS = [
	'site_late',
	'mail_failing',
	'silent',
	'inverted',
	'clipped',
	'refresh_not_cured',
	'refresh_due',
	'drifting',
	'reference_vehicle',
	'low_cell',
	'rejected_frames',
	'clock_off'
] as const;

export const NOTICE_ENDS = ['healed', 'proved', 'visit', 'removed', 'folded'] as const;

/** What the system tells people. One open row a subject: its kind is the most serious of what holds. */
export const notice = mysqlTable(
	'notice',
	{
		id: int('id').autoincrement().primaryKey(),
		/** null: of the whole installation (mail failing). */
		siteId: int('site_id').references(() => site.id),
		nodeId: int('node_id').references(() => node.id),
		bayId: int('bay_id').references(() => bay.id),
		/** 'node:<id>', 'site:<id>', 'storm:<site>:<shared>:<label>', 'mail:<person>'; null once closed. */
		subject: varchar('subject', { length: 160 }).unique(),
		/** The subject that it has or had. */
		about: varchar('about', { length: 160 }).notNull(),
		kind: mysqlEnum('kind', NOTICE_KINDS).notNull(),
		/** All kinds that hold now, comma separated, the most serious first. */
		kinds: varchar('kinds', { length: 200 }).notNull(),
		/** A film refresh was due: only a proof closes it. */
		awaitsProof: boolean('awaits_proof').notNull().default(false),
		/** How often it has opened: what comes back within a day is the same notice again. */
		times: smallint('times').notNull().default(1),
		/** When what it tells of began. */
		sinceMs: atMs('since_ms').notNull(),
		openedAtMs: atMs('opened_at_ms').notNull(),
		/** By when somebody must have taken it; then it goes to the deputy, then to the admins. */
		deadlineMs: atMs('deadline_ms').notNull(),
		/** 0 told, 1 the deputy is told, 2 the admins are. */
		stage: smallint('stage').notNull().default(0),
		/** JSON text, notices/facts.ts. */
		facts: text('facts').notNull(),
		takenBy: int('taken_by').references(() => person.id),
		takenAtMs: atMs('taken_at_ms'),
		snoozedUntilMs: atMs('snoozed_until_ms'),
		closedAtMs: atMs('closed_at_ms'),
		closedHow: mysqlEnum('closed_how', NOTICE_ENDS)
	},
	(t) => [
		index('notice_site').on(t.siteId, t.closedAtMs),
		index('notice_about').on(t.about, t.closedAtMs),
		index('notice_due').on(t.closedAtMs, t.deadlineMs)
	]
);

export const NOTICE_ACTS = [
	'opened',
	'reopened',
	'kind',
	'told',
	'taken',
	'handed',
	'given_back',
	'snoozed',
	'comment',
	'escalated',
	'awaits_proof',
	'closed'
] as const;

/** A notice's history; append-only. */
export const noticeEntry = mysqlTable(
	'notice_entry',
	{
		id: int('id').autoincrement().primaryKey(),
		noticeId: int('notice_id')
			.notNull()
			.references(() => notice.id),
		atMs: atMs('at_ms').notNull(),
		what: mysqlEnum('what', NOTICE_ACTS).notNull(),
		/** null: by the system. */
		personId: int('person_id').references(() => person.id),
		detail: varchar('detail', { length: 600 }).notNull().default('')
	},
	(t) => [index('notice_entry_of').on(t.noticeId, t.id)]
);

/** How far the change log of a site is taken into notices. */
export const noticeCursor = mysqlTable('notice_cursor', {
	siteId: int('site_id')
		.primaryKey()
		.references(() => site.id),
	changeId: atMs('change_id').notNull(),
	lookedAtMs: atMs('looked_at_ms').notNull()
});

/** When a person last looked at the notices of a site (0 = of all sites). */
export const noticeLook = mysqlTable(
	'notice_look',
	{
		personId: int('person_id')
			.notNull()
			.references(() => person.id),
		siteId: int('site_id').notNull(),
		atMs: atMs('at_ms').notNull()
	},
	(t) => [primaryKey({ columns: [t.personId, t.siteId] })]
);
