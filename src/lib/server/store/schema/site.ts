import {
	boolean,
	double,
	int,
	mysqlEnum,
	mysqlTable,
	smallint,
	text,
	uniqueIndex,
	varchar
} from 'drizzle-orm/mysql-core';
import { atMs } from './columns';

export const site = mysqlTable('site', {
	id: int('id').autoincrement().primaryKey(),
	slug: varchar('slug', { length: 32 }).notNull().unique(),
	name: varchar('name', { length: 120 }).notNull(),
	latDeg: double('lat_deg').notNull(),
	lonDeg: double('lon_deg').notNull(),
	altitudeM: double('altitude_m').notNull().default(0),
	timezone: varchar('timezone', { length: 64 }).notNull(),
	/** The newest id of the site's change log; ids come from LAST_INSERT_ID(last_change + n). */
	lastChange: atMs('last_change').notNull().default(0),
	/** The oldest change id still kept; a cursor before it is answered 410. */
	firstChange: atMs('first_change').notNull().default(1),
	graceS: int('grace_s').notNull().default(900),
	pairRule: mysqlEnum('pair_rule', ['calibrate', 'diagnose', 'never'])
		.notNull()
		.default('calibrate'),
	/** Local minutes of the day between which pulses may be fired by rule. */
	quietFromMin: smallint('quiet_from_min').notNull().default(60),
	quietToMin: smallint('quiet_to_min').notNull().default(300),
	readingDays: smallint('reading_days').notNull().default(400),
	eventDays: smallint('event_days').notNull().default(800),
	accessNotes: text('access_notes'),
	demo: boolean('demo').notNull().default(false),
	createdAtMs: atMs('created_at_ms').notNull(),
	removedAtMs: atMs('removed_at_ms')
});

export const zone = mysqlTable(
	'zone',
	{
		id: int('id').autoincrement().primaryKey(),
		siteId: int('site_id')
			.notNull()
			.references(() => site.id),
		code: varchar('code', { length: 32 }).notNull(),
		name: varchar('name', { length: 120 }).notNull()
	},
	(t) => [uniqueIndex('zone_site_code').on(t.siteId, t.code)]
);
