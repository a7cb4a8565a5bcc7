import {
	boolean,
	index,
	int,
	mediumtext,
	mysqlEnum,
	mysqlTable,
	smallint,
	text,
	tinyint,
	uniqueIndex,
	varchar
} from 'drizzle-orm/mysql-core';
import { atMs } from './columns';
import { site, zone } from './site';

export const bay = mysqlTable(
	'bay',
	{
		id: int('id').autoincrement().primaryKey(),
		siteId: int('site_id')
			.notNull()
			.references(() => site.id),
		zoneId: int('zone_id')
			.notNull()
			.references(() => zone.id),
		code: varchar('code', { length: 32 }).notNull(),
		/** GeoJSON Polygon (RFC 7946) as text, or null where not drawn. */
		geometry: mediumtext('geometry'),
		personal: boolean('personal').notNull().default(false),
		createdAtMs: atMs('created_at_ms').notNull(),
		/** 0 while the bay is there, so that its code is unique among the living. */
		removedAtMs: atMs('removed_at_ms').notNull().default(0)
	},
	(t) => [uniqueIndex('bay_site_code').on(t.siteId, t.code, t.removedAtMs)]
);

export const BAY_STATES = ['vacant', 'occupied', 'unknown'] as const;
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

/** What is said of a bay now. Written only when something a reader can see changes. */
export const bayState = mysqlTable(
	'bay_state',
	{
		bayId: int('bay_id')
			.primaryKey()
			.references(() => bay.id),
		siteId: int('site_id')
			.notNull()
			.references(() => site.id),
		nodeId: int('node_id'),
		state: mysqlEnum('state', BAY_STATES).notNull().default('unknown'),
		sinceMs: atMs('since_ms'),
		/** Confidence in twentieths (0..20), null while unknown. */
		confidence20: tinyint('confidence_20'),
		doubtReason: varchar('doubt_reason', { length: 64 }),
		doubtSinceMs: atMs('doubt_since_ms'),
		condition: mysqlEnum('condition', CONDITIONS).notNull().default('unplaced'),
		/** The other conditions and marks that hold, comma separated. */
		also: varchar('also', { length: 200 }).notNull().default(''),
		lastKnownState: mysqlEnum('last_known_state', BAY_STATES),
		lastKnownAtMs: atMs('last_known_at_ms'),
		/** Evidence as JSON text: {because: string[], against: string[]}. */
		evidence: text('evidence'),
		/** The change-log id that last touched this row. */
		changeId: atMs('change_id').notNull().default(0)
	},
	(t) => [index('bay_state_site_change').on(t.siteId, t.changeId)]
);

/** Effective history of a bay: a pure function of stored rows, acts and settings; rewritten by replay. */
export const history = mysqlTable(
	'history',
	{
		id: atMs('id').autoincrement().primaryKey(),
		bayId: int('bay_id')
			.notNull()
			.references(() => bay.id),
		atMs: atMs('at_ms').notNull(),
		type: mysqlEnum('type', ['arrival', 'departure', 'unknown', 'known', 'settled']).notNull(),
		state: mysqlEnum('state', BAY_STATES).notNull(),
		confidence20: tinyint('confidence_20'),
		uncertaintyS: int('uncertainty_s').notNull(),
		evidence: text('evidence'),
		/** Event time of the row or act that decided this entry: replay from a snapshot at S drops what was decided after S. */
		decidedAtMs: atMs('decided_at_ms').notNull(),
		/** Event time of what showed that it never happened (an echo found later); null = effective. */
		voidedAtMs: atMs('voided_at_ms'),
		/** Stamps of the batches that wrote the entry and that voided it (compare node_snapshot.taken_at_ms). */
		recordedAtMs: atMs('recorded_at_ms').notNull().default(0),
		voidRecordedAtMs: atMs('void_recorded_at_ms'),
		/** The feed's event that told this entry. */
		eventId: atMs('event_id')
	},
	(t) => [index('history_bay_at').on(t.bayId, t.atMs)]
);

export const closure = mysqlTable(
	'closure',
	{
		id: int('id').autoincrement().primaryKey(),
		siteId: int('site_id')
			.notNull()
			.references(() => site.id),
		bayId: int('bay_id')
			.notNull()
			.references(() => bay.id),
		fromMs: atMs('from_ms').notNull(),
		toMs: atMs('to_ms').notNull(),
		reason: varchar('reason', { length: 400 }).notNull(),
		actId: int('act_id').notNull(),
		/** Set when the closure was lifted before `toMs`. */
		liftedAtMs: atMs('lifted_at_ms'),
		/** What the check at the end found: null until then. */
		endFinding: varchar('end_finding', { length: 64 }),
		stage: smallint('stage').notNull().default(0)
	},
	(t) => [index('closure_bay').on(t.bayId, t.fromMs)]
);
