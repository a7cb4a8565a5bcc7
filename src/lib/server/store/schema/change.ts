import {
	boolean,
	index,
	int,
	mysqlEnum,
	mysqlTable,
	primaryKey,
	text,
	tinyint
} from 'drizzle-orm/mysql-core';
import { BAY_STATES, bay } from './bay';
import { atMs } from './columns';
import { node } from './node';
import { site } from './site';

export const EVENT_TYPES = [
	'arrival',
	'departure',
	'unknown',
	'known',
	'settled',
	'voided'
] as const;

/** One change log a site; ids without gaps. Append-only. Events are a row here and one in `event`. */
export const change = mysqlTable(
	'change',
	{
		siteId: int('site_id')
			.notNull()
			.references(() => site.id),
		id: atMs('id').notNull(),
		kind: mysqlEnum('kind', [
			'event',
			'bay',
			'condition',
			'geometry',
			'closure',
			'removed',
			'site'
		]).notNull(),
		bayId: int('bay_id').references(() => bay.id),
		nodeId: int('node_id').references(() => node.id),
		recordedAtMs: atMs('recorded_at_ms').notNull()
	},
	(t) => [primaryKey({ columns: [t.siteId, t.id] }), index('change_bay').on(t.bayId, t.id)]
);

/** What was said when; never changes once written. */
export const event = mysqlTable(
	'event',
	{
		siteId: int('site_id')
			.notNull()
			.references(() => site.id),
		id: atMs('id').notNull(),
		bayId: int('bay_id')
			.notNull()
			.references(() => bay.id),
		type: mysqlEnum('type', EVENT_TYPES).notNull(),
		state: mysqlEnum('state', BAY_STATES).notNull(),
		atMs: atMs('at_ms').notNull(),
		recordedAtMs: atMs('recorded_at_ms').notNull(),
		confidence20: tinyint('confidence_20'),
		uncertaintyS: int('uncertainty_s').notNull(),
		late: boolean('late').notNull().default(false),
		/** The id of the event that this one voids. */
		voids: atMs('voids'),
		evidence: text('evidence')
	},
	(t) => [
		primaryKey({ columns: [t.siteId, t.id] }),
		index('event_bay_at').on(t.bayId, t.atMs),
		index('event_site_at').on(t.siteId, t.atMs),
		index('event_voids').on(t.siteId, t.voids)
	]
);
