import {
	boolean,
	index,
	int,
	mysqlEnum,
	mysqlTable,
	smallint,
	text,
	uniqueIndex,
	varchar
} from 'drizzle-orm/mysql-core';
import { bay } from './bay';
import { atMs, fixedBytes } from './columns';
import { node } from './node';
import { site } from './site';

/** Steps of a film refresh (method 7); the last five are ends. */
export const REFRESH_STATES = [
	'asked',
	'approved',
	'waiting',
	'sent',
	'obeyed',
	'measured',
	'proved',
	'not_cured',
	'refused',
	'expired',
	'called_off'
] as const;

/** Who or what set it going. `pair_rule`: a pair that a rule asked for, entered afterwards. */
export const REFRESH_ORIGINS = ['person', 'key', 'schedule', 'pair_rule'] as const;

/** Many film refreshes ordered together. */
export const refreshBulk = mysqlTable(
	'refresh_bulk',
	{
		id: int('id').autoincrement().primaryKey(),
		siteId: int('site_id')
			.notNull()
			.references(() => site.id),
		/** 'zone A' or '12 bays picked'. */
		what: varchar('what', { length: 120 }).notNull(),
		reason: varchar('reason', { length: 400 }).notNull(),
		state: mysqlEnum('state', ['running', 'paused', 'called_off', 'done'])
			.notNull()
			.default('running'),
		/** JSON text: bays that did not qualify, and why. */
		leftOut: text('left_out').notNull(),
		askedBy: varchar('asked_by', { length: 64 }).notNull(),
		askedAtMs: atMs('asked_at_ms').notNull(),
		endedAtMs: atMs('ended_at_ms')
	},
	(t) => [index('refresh_bulk_site').on(t.siteId, t.askedAtMs)]
);

/** A film refresh and its proof. Written only through refreshes/apply.ts, one transition a time. */
export const refresh = mysqlTable(
	'refresh',
	{
		id: int('id').autoincrement().primaryKey(),
		siteId: int('site_id')
			.notNull()
			.references(() => site.id),
		nodeId: int('node_id')
			.notNull()
			.references(() => node.id),
		bayId: int('bay_id')
			.notNull()
			.references(() => bay.id),
		bulkId: int('bulk_id').references(() => refreshBulk.id),
		origin: mysqlEnum('origin', REFRESH_ORIGINS).notNull(),
		state: mysqlEnum('state', REFRESH_STATES).notNull(),
		/** The node while the order is open, null afterwards: one open order a node. */
		openNodeId: int('open_node_id'),
		reason: varchar('reason', { length: 400 }).notNull(),
		/** JSON text: what made it due (conditions, evidence, drift), as it stood when asked. */
		evidence: text('evidence').notNull(),
		askedBy: varchar('asked_by', { length: 64 }).notNull(),
		askedAtMs: atMs('asked_at_ms').notNull(),
		approvedBy: varchar('approved_by', { length: 64 }),
		approvedAtMs: atMs('approved_at_ms'),
		/** The approver lets it run outside the site's quiet hours. */
		anyHour: boolean('any_hour').notNull().default(false),
		/** What it waits for: a guard's name, and since when that one. */
		waitsFor: varchar('waits_for', { length: 32 }),
		waitsSinceMs: atMs('waits_since_ms'),
		/** Attempt: the command's id stays until the node has said what became of it. */
		commandId: fixedBytes('command_id', { length: 8 }),
		boot: int('boot', { unsigned: true }),
		attempts: smallint('attempts').notNull().default(0),
		sentAtMs: atMs('sent_at_ms'),
		obeyedAtMs: atMs('obeyed_at_ms'),
		/** The pulse of the pair that answered. */
		pulseAtMs: atMs('pulse_at_ms'),
		/** Still readings count from here; moves on when a vehicle came in between. */
		measureFromMs: atMs('measure_from_ms'),
		disturbed: boolean('disturbed').notNull().default(false),
		stillReadings: int('still_readings').notNull().default(0),
		/** JSON text: before and after (refreshes/proof.ts). */
		proof: text('proof'),
		verdict: varchar('verdict', { length: 400 }),
		visitWanted: boolean('visit_wanted').notNull().default(false),
		endedAtMs: atMs('ended_at_ms'),
		/** Counts transitions: of two that write at once the second begins anew. */
		revision: int('revision').notNull().default(0)
	},
	(t) => [
		uniqueIndex('refresh_open_node').on(t.openNodeId),
		index('refresh_site_asked').on(t.siteId, t.askedAtMs),
		index('refresh_node').on(t.nodeId, t.askedAtMs),
		index('refresh_ended').on(t.endedAtMs),
		index('refresh_bulk_id').on(t.bulkId)
	]
);

/**
 * Every step with who, when and why, written in the transaction that makes it. Others subscribe by
 * `told_at_ms IS NULL` (ids may be committed out of order) and set it in their own transaction.
 */
export const refreshTransition = mysqlTable(
	'refresh_transition',
	{
		id: int('id').autoincrement().primaryKey(),
		refreshId: int('refresh_id')
			.notNull()
			.references(() => refresh.id),
		siteId: int('site_id').notNull(),
		nodeId: int('node_id').notNull(),
		fromState: mysqlEnum('from_state', REFRESH_STATES),
		toState: mysqlEnum('to_state', REFRESH_STATES).notNull(),
		/** 'person:<id>', 'key:<id>', 'rule' or 'node'. */
		byActor: varchar('by_actor', { length: 64 }).notNull(),
		why: varchar('why', { length: 400 }).notNull(),
		atMs: atMs('at_ms').notNull(),
		toldAtMs: atMs('told_at_ms')
	},
	(t) => [
		index('refresh_transition_refresh').on(t.refreshId, t.id),
		index('refresh_transition_told').on(t.toldAtMs, t.id)
	]
);

/** A site's rules on pulses; no row = the defaults of refreshes/settings.ts. Quiet hours stand with the site. */
export const refreshSettings = mysqlTable('refresh_settings', {
	siteId: int('site_id')
		.primaryKey()
		.references(() => site.id),
	/** Who asks may approve. */
	ownApproval: boolean('own_approval').notNull(),
	/** Commands under way at once. */
	mostAtOnce: smallint('most_at_once').notNull(),
	/** Hours after an end before the node is pulsed again. */
	holdOffH: smallint('hold_off_h').notNull(),
	scheduleOn: boolean('schedule_on').notNull(),
	/** Reasons that the schedule takes up, separated by commas. */
	scheduleReasons: varchar('schedule_reasons', { length: 200 }).notNull(),
	mostANight: smallint('most_a_night').notNull(),
	changedBy: varchar('changed_by', { length: 64 }).notNull(),
	changedAtMs: atMs('changed_at_ms').notNull()
});
