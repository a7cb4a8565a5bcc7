import {
	boolean,
	index,
	int,
	mysqlEnum,
	mysqlTable,
	smallint,
	text,
	varchar
} from 'drizzle-orm/mysql-core';
import { atMs } from './columns';
import { notice } from './notice';
import { person } from './people';
import { site } from './site';

/** How a person wants to be mailed; without a row the role's defaults hold. */
export const mailSetting = mysqlTable('mail_setting', {
	personId: int('person_id')
		.primaryKey()
		.references(() => person.id),
	/** JSON text: pace by kind, schemas/mail-settings.ts. */
	paces: text('paces').notNull(),
	/** Site ids, comma separated; null = every site within reach. */
	sites: text('sites'),
	/** Local minutes of the day in the person's zone. */
	quietFromMin: smallint('quiet_from_min').notNull(),
	quietToMin: smallint('quiet_to_min').notNull(),
	quietWeekends: boolean('quiet_weekends').notNull(),
	dailyAtMin: smallint('daily_at_min').notNull(),
	deputyId: int('deputy_id').references(() => person.id),
	/** Set by one-click unsubscribe: nothing but what was asked for is mailed until switched on again. */
	offAtMs: atMs('off_at_ms')
});

export const WISH_WHATS = ['opened', 'worse', 'escalated', 'taken', 'closed'] as const;

/** Somebody is to be told of something; written with its cause, composed into one mail with others. */
export const mailWish = mysqlTable(
	'mail_wish',
	{
		id: int('id').autoincrement().primaryKey(),
		personId: int('person_id')
			.notNull()
			.references(() => person.id),
		siteId: int('site_id').references(() => site.id),
		noticeId: int('notice_id')
			.notNull()
			.references(() => notice.id),
		what: mysqlEnum('what', WISH_WHATS).notNull(),
		detail: varchar('detail', { length: 600 }).notNull().default(''),
		wishedAtMs: atMs('wished_at_ms').notNull(),
		/** Quiet hours and digests are in it. */
		dueMs: atMs('due_ms').notNull(),
		doneAtMs: atMs('done_at_ms'),
		/** Of the mail that holds it; null when it was over before it was told. */
		messageId: varchar('message_id', { length: 120 })
	},
	(t) => [
		index('mail_wish_due').on(t.doneAtMs, t.dueMs),
		index('mail_wish_told').on(t.personId, t.siteId, t.doneAtMs),
		index('mail_wish_notice').on(t.noticeId, t.personId)
	]
);
