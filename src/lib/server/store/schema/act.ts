import { index, int, mysqlEnum, mysqlTable, text, varchar } from 'drizzle-orm/mysql-core';
import { bay } from './bay';
import { atMs } from './columns';
import { node } from './node';
import { site } from './site';

export const ACT_KINDS = [
	'place',
	'accept',
	'withdraw',
	'settle',
	'undo_settle',
	'close',
	'lift',
	'parameters',
	'accept_boot',
	'ask'
] as const;

/** What people and API programs did; the pipeline takes each into its next batch, in event time. */
export const act = mysqlTable(
	'act',
	{
		id: int('id').autoincrement().primaryKey(),
		siteId: int('site_id')
			.notNull()
			.references(() => site.id),
		nodeId: int('node_id').references(() => node.id),
		bayId: int('bay_id').references(() => bay.id),
		kind: mysqlEnum('kind', ACT_KINDS).notNull(),
		/** Event time: when the person saw it or from when it holds. */
		atMs: atMs('at_ms').notNull(),
		/** JSON text, checked by schemas/act.ts. */
		args: text('args').notNull(),
		/** 'person:<id>', 'key:<id>' or 'rule'. */
		byActor: varchar('by_actor', { length: 64 }).notNull(),
		why: varchar('why', { length: 400 }),
		recordedAtMs: atMs('recorded_at_ms').notNull(),
		takenAtMs: atMs('taken_at_ms'),
		/** What the pipeline said of it: 'done' or why not. */
		outcome: varchar('outcome', { length: 200 })
	},
	(t) => [
		index('act_taken').on(t.takenAtMs, t.id),
		index('act_bay').on(t.bayId, t.atMs),
		index('act_node').on(t.nodeId, t.atMs)
	]
);

/** A person's or site's override of one detection or drift parameter. */
export const parameter = mysqlTable(
	'parameter',
	{
		id: int('id').autoincrement().primaryKey(),
		siteId: int('site_id')
			.notNull()
			.references(() => site.id),
		nodeId: int('node_id').references(() => node.id),
		name: varchar('name', { length: 64 }).notNull(),
		value: varchar('value', { length: 64 }).notNull(),
		fromMs: atMs('from_ms').notNull(),
		untilMs: atMs('until_ms'),
		byActor: varchar('by_actor', { length: 64 }).notNull(),
		why: varchar('why', { length: 400 }).notNull(),
		endedBy: varchar('ended_by', { length: 64 }),
		endedWhy: varchar('ended_why', { length: 400 })
	},
	(t) => [index('parameter_site').on(t.siteId, t.nodeId)]
);
