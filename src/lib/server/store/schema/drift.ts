import {
	boolean,
	index,
	int,
	mysqlEnum,
	mysqlTable,
	primaryKey,
	smallint,
	tinyint
} from 'drizzle-orm/mysql-core';
import { atMs, bytes, counts24 } from './columns';
import { node } from './node';
import { site } from './site';

/** Fields in 0.001 mG (microgauss) as whole numbers: exact over the wire and small. */
const ug = counts24;

/** How far the hours of a site are closed (method 5). */
export const driftSite = mysqlTable('drift_site', {
	siteId: int('site_id')
		.primaryKey()
		.references(() => site.id),
	/** First hour. */
	fromMs: atMs('from_ms').notNull(),
	/** End of the last closed hour. */
	closedToMs: atMs('closed_to_ms').notNull()
});

/** Closed hours that late rows, pulses or a changed history touched: all from the earliest on is closed anew. */
export const driftMark = mysqlTable(
	'drift_mark',
	{
		siteId: int('site_id')
			.notNull()
			.references(() => site.id),
		hourMs: atMs('hour_ms').notNull(),
		markedAtMs: atMs('marked_at_ms').notNull()
	},
	(t) => [primaryKey({ columns: [t.siteId, t.hourMs] })]
);

/** A node's drift as of the last closed hour of its site. */
export const driftNode = mysqlTable(
	'drift_node',
	{
		nodeId: int('node_id')
			.primaryKey()
			.references(() => node.id),
		siteId: int('site_id')
			.notNull()
			.references(() => site.id),
		/** The placing that it belongs to. */
		placedAtMs: atMs('placed_at_ms').notNull(),
		/** drift/codec.ts, at most 4096 bytes. */
		memory: bytes('memory', { length: 4096 }).notNull(),
		driftingSinceMs: atMs('drifting_since_ms'),
		/** First hour of the reason for a film refresh (method 6); null = none. */
		refreshSinceMs: atMs('refresh_since_ms'),
		/** A pair that the site's rule would have at the next chance. */
		pairWanted: mysqlEnum('pair_wanted', ['calibrate', 'diagnose'])
	},
	(t) => [index('drift_node_site').on(t.siteId)]
);

/** Memories at the turn of UTC days, kept for 15 days: late rows are closed anew from there. */
export const driftSnapshot = mysqlTable(
	'drift_snapshot',
	{
		siteId: int('site_id')
			.notNull()
			.references(() => site.id),
		/** Every hour before it is in. */
		atMs: atMs('at_ms').notNull(),
		nodeId: int('node_id')
			.notNull()
			.references(() => node.id),
		placedAtMs: atMs('placed_at_ms').notNull(),
		memory: bytes('memory', { length: 4096 }).notNull()
	},
	(t) => [primaryKey({ columns: [t.siteId, t.atMs, t.nodeId] })]
);

/** One closed hour of one node: its still readings of one level, and, while vacant, what moved it. */
export const driftHour = mysqlTable(
	'drift_hour',
	{
		nodeId: int('node_id')
			.notNull()
			.references(() => node.id),
		hourMs: atMs('hour_ms').notNull(),
		n: smallint('n', { unsigned: true }).notNull(),
		/** Begin of the stay; null = vacant. */
		stayFromMs: atMs('stay_from_ms'),
		/** 0.01 °C. */
		tempCc: smallint('temp_cc'),
		fieldXUg: ug('field_x_ug').notNull(),
		fieldYUg: ug('field_y_ug').notNull(),
		fieldZUg: ug('field_z_ug').notNull(),
		offsetXUg: ug('offset_x_ug').notNull(),
		offsetYUg: ug('offset_y_ug').notNull(),
		offsetZUg: ug('offset_z_ug').notNull(),
		/** Parts since the reference: null while occupied. Their sum is the total. */
		temperatureXUg: ug('temperature_x_ug'),
		temperatureYUg: ug('temperature_y_ug'),
		temperatureZUg: ug('temperature_z_ug'),
		geomagneticXUg: ug('geomagnetic_x_ug'),
		geomagneticYUg: ug('geomagnetic_y_ug'),
		geomagneticZUg: ug('geomagnetic_z_ug'),
		bridgeXUg: ug('bridge_x_ug'),
		bridgeYUg: ug('bridge_y_ug'),
		bridgeZUg: ug('bridge_z_ug'),
		filmXUg: ug('film_x_ug'),
		filmYUg: ug('film_y_ug'),
		filmZUg: ug('film_z_ug'),
		surroundingsXUg: ug('surroundings_x_ug'),
		surroundingsYUg: ug('surroundings_y_ug'),
		surroundingsZUg: ug('surroundings_z_ug'),
		unexplainedXUg: ug('unexplained_x_ug'),
		unexplainedYUg: ug('unexplained_y_ug'),
		unexplainedZUg: ug('unexplained_z_ug'),
		/** Standard error of unexplained; null = it cannot be judged. */
		errorXUg: ug('error_x_ug'),
		errorYUg: ug('error_y_ug'),
		errorZUg: ug('error_z_ug'),
		/** Bits of drift/codec.ts `noteBits`. */
		notes: tinyint('notes', { unsigned: true }).notNull().default(0)
	},
	(t) => [primaryKey({ columns: [t.nodeId, t.hourMs] })]
);

/** The site's geomagnetic change in one closed hour, along the horizontal field, across it, vertical. */
export const driftLine = mysqlTable(
	'drift_line',
	{
		siteId: int('site_id')
			.notNull()
			.references(() => site.id),
		hourMs: atMs('hour_ms').notNull(),
		verdict: mysqlEnum('verdict', ['known', 'few_nodes', 'cause_not_known']).notNull(),
		hUg: ug('h_ug').notNull(),
		eUg: ug('e_ug').notNull(),
		zUg: ug('z_ug').notNull(),
		spreadUg: ug('spread_ug'),
		nodes: int('nodes').notNull()
	},
	(t) => [primaryKey({ columns: [t.siteId, t.hourMs] })]
);

/** An accepted pair and what it told: every one is a film refresh. Key as in `pulse`. */
export const driftPair = mysqlTable(
	'drift_pair',
	{
		nodeId: int('node_id')
			.notNull()
			.references(() => node.id),
		boot: int('boot', { unsigned: true }).notNull(),
		seq: int('seq', { unsigned: true }).notNull(),
		atMs: atMs('at_ms').notNull(),
		vacant: boolean('vacant').notNull(),
		/** false: told before its hour was closed, and told again then. */
		settled: boolean('settled').notNull(),
		tempCc: smallint('temp_cc'),
		fieldXUg: ug('field_x_ug').notNull(),
		fieldYUg: ug('field_y_ug').notNull(),
		fieldZUg: ug('field_z_ug').notNull(),
		offsetXUg: ug('offset_x_ug').notNull(),
		offsetYUg: ug('offset_y_ug').notNull(),
		offsetZUg: ug('offset_z_ug').notNull(),
		/** What the film had lost; null = the reading before the pulse did not come. */
		filmXUg: ug('film_x_ug'),
		filmYUg: ug('film_y_ug'),
		filmZUg: ug('film_z_ug'),
		/** Null where the pair only completed a reference without an offset. */
		bridgeXUg: ug('bridge_x_ug'),
		bridgeYUg: ug('bridge_y_ug'),
		bridgeZUg: ug('bridge_z_ug'),
		/** Null in an occupied bay. */
		surroundingsXUg: ug('surroundings_x_ug'),
		surroundingsYUg: ug('surroundings_y_ug'),
		surroundingsZUg: ug('surroundings_z_ug'),
		/** The largest of what it told. */
		named: mysqlEnum('named', ['bridge', 'film', 'gain_or_field', 'tilt', 'steel_or_works']),
		namedUg: ug('named_ug')
	},
	(t) => [
		primaryKey({ columns: [t.nodeId, t.boot, t.seq] }),
		index('drift_pair_at').on(t.nodeId, t.atMs)
	]
);
