import {
	bigint,
	boolean,
	double,
	float,
	index,
	int,
	mysqlEnum,
	mysqlTable,
	primaryKey,
	smallint,
	text,
	tinyint,
	varchar
} from 'drizzle-orm/mysql-core';
import { bay } from './bay';
import { atMs, bytes, counts24, fixedBytes } from './columns';
import { site } from './site';

export const profile = mysqlTable('profile', {
	code: varchar('code', { length: 32 }).primaryKey(),
	/** The sensor profile as JSON text (magnetics/sensor-profile.ts checks it). */
	body: text('body').notNull(),
	builtIn: boolean('built_in').notNull().default(false),
	changedAtMs: atMs('changed_at_ms').notNull()
});

export const node = mysqlTable(
	'node',
	{
		id: int('id').autoincrement().primaryKey(),
		serial: varchar('serial', { length: 32 }).notNull().unique(),
		siteId: int('site_id')
			.notNull()
			.references(() => site.id),
		bayId: int('bay_id').references(() => bay.id),
		profileCode: varchar('profile_code', { length: 32 })
			.notNull()
			.references(() => profile.code),
		gateway: varchar('gateway', { length: 64 }),
		/** AES-256-GCM (iv 12 · tag 16 · cipher 32), AAD = node id. */
		keySealed: bytes('key_sealed', { length: 96 }),
		keyPrevSealed: bytes('key_prev_sealed', { length: 96 }),
		keyPrevUntilMs: atMs('key_prev_until_ms'),
		/** SHA-256 of the MQTT password. */
		mqttHash: fixedBytes('mqtt_hash', { length: 32 }).notNull(),
		mqttHashPrev: fixedBytes('mqtt_hash_prev', { length: 32 }),
		preCommissioned: boolean('pre_commissioned').notNull().default(false),
		unsignedAllowed: boolean('unsigned_allowed').notNull().default(false),
		/** Direction of the node's x axis east of true north; null = not entered. */
		headingDeg: double('heading_deg'),
		/** Position of the node, metres east and north of the site's origin; null = the bay's centre. */
		eastM: double('east_m'),
		northM: double('north_m'),
		firmware: varchar('firmware', { length: 64 }),
		bootCause: varchar('boot_cause', { length: 64 }),
		/** The reporting habit in force as last heard or assumed. */
		periodS: int('period_s').notNull().default(60),
		deltaMg: int('delta_mg').notNull().default(8),
		/** The habit to go back to after learning or proving. */
		usualPeriodS: int('usual_period_s').notNull().default(60),
		createdAtMs: atMs('created_at_ms').notNull(),
		placedAtMs: atMs('placed_at_ms'),
		withdrawnAtMs: atMs('withdrawn_at_ms')
	},
	(t) => [index('node_site').on(t.siteId), index('node_bay').on(t.bayId)]
);

/** From where a node last signed in at the embedded broker: what it may share with others that fall silent. */
export const nodeNetwork = mysqlTable('node_network', {
	nodeId: int('node_id')
		.primaryKey()
		.references(() => node.id),
	/** An IPv4 address, or the /64 of an IPv6 one. */
	network: varchar('network', { length: 45 }).notNull(),
	sinceMs: atMs('since_ms').notNull()
});

/** Written with every batch: at most 300 bytes, binary, layout number first. Only the pipeline writes it. */
export const nodeFast = mysqlTable('node_fast', {
	nodeId: int('node_id')
		.primaryKey()
		.references(() => node.id),
	/** Arrival of the newest message. */
	heardAtMs: atMs('heard_at_ms').notNull(),
	/** The newest boot heard (commands are bound to it); null before the first message. */
	heardBoot: int('heard_boot', { unsigned: true }),
	/** Event time and order of the newest row that detection has taken; null before the first. */
	rowAtMs: atMs('row_at_ms'),
	boot: int('boot', { unsigned: true }),
	seq: int('seq', { unsigned: true }),
	row: tinyint('row', { unsigned: true }),
	/** Event time of the oldest stored row that detection has yet to take; null = none waits. */
	waitingFromMs: atMs('waiting_from_ms'),
	/** Newest row by event time, for lists: counts, 0.1 °C, and the last that came of the others. */
	lastAtMs: atMs('last_at_ms'),
	x: counts24('x'),
	y: counts24('y'),
	z: counts24('z'),
	polarity: tinyint('polarity'),
	tempDc: smallint('temp_dc'),
	batteryMv: smallint('battery_mv', { unsigned: true }),
	rssiDbm: smallint('rssi_dbm'),
	/** Bit 0 clock off, 1 newest message unsigned, 2 fast reporting. */
	marks: tinyint('marks', { unsigned: true }).notNull().default(0),
	state: bytes('state', { length: 300 }).notNull()
});

/** The least (arrival - sent) of each of the last 24 hours, binary (protocol, server step 4). */
export const nodeClock = mysqlTable('node_clock', {
	nodeId: int('node_id')
		.primaryKey()
		.references(() => node.id),
	skews: bytes('skews', { length: 240 }).notNull()
});

/** Written only when it changes: learning window, slopes, pass heights. Under 4 kB. */
export const nodeSlow = mysqlTable('node_slow', {
	nodeId: int('node_id')
		.primaryKey()
		.references(() => node.id),
	state: bytes('state', { length: 4096 }).notNull()
});

/** Fast and slow state of a node as of an event time; kept for 20 min, at most 5 min apart, and one a UTC day for 15 days. */
export const nodeSnapshot = mysqlTable(
	'node_snapshot',
	{
		nodeId: int('node_id')
			.notNull()
			.references(() => node.id),
		atMs: atMs('at_ms').notNull(),
		/** The batch's stamp: a replay from here drops what history recorded after it. */
		takenAtMs: atMs('taken_at_ms').notNull(),
		daily: boolean('daily').notNull().default(false),
		/** As in node_fast, at that moment. */
		rowAtMs: atMs('row_at_ms'),
		boot: int('boot', { unsigned: true }),
		seq: int('seq', { unsigned: true }),
		row: tinyint('row', { unsigned: true }),
		fast: bytes('fast', { length: 300 }).notNull(),
		slow: bytes('slow', { length: 4096 })
	},
	(t) => [primaryKey({ columns: [t.nodeId, t.atMs] })]
);

/** A node's accepted quiet field; superseded, never overwritten. */
export const reference = mysqlTable(
	'reference',
	{
		id: int('id').autoincrement().primaryKey(),
		nodeId: int('node_id')
			.notNull()
			.references(() => node.id),
		bayId: int('bay_id')
			.notNull()
			.references(() => bay.id),
		learnedAtMs: atMs('learned_at_ms').notNull(),
		xMg: double('x_mg').notNull(),
		yMg: double('y_mg').notNull(),
		zMg: double('z_mg').notNull(),
		sigmaMg: double('sigma_mg').notNull(),
		tempC: double('temp_c'),
		/** Offset in use when learned; null = no pair yet. */
		offsetXMg: double('offset_x_mg'),
		offsetYMg: double('offset_y_mg'),
		offsetZMg: double('offset_z_mg'),
		readings: int('readings').notNull(),
		acceptedAtMs: atMs('accepted_at_ms'),
		acceptedBy: varchar('accepted_by', { length: 120 }),
		provisional: boolean('provisional').notNull().default(false),
		supersededAtMs: atMs('superseded_at_ms'),
		why: varchar('why', { length: 400 })
	},
	(t) => [index('reference_node').on(t.nodeId, t.learnedAtMs)]
);

/** Which (boot, seq) are stored: block = seq >> 6, bits OR-ed in the batch's own transaction. */
export const received = mysqlTable(
	'received',
	{
		nodeId: int('node_id')
			.notNull()
			.references(() => node.id),
		boot: atMs('boot').notNull(),
		block: int('block', { unsigned: true }).notNull(),
		/** 64 flags: unsigned, and bigint in TypeScript, because a number holds only 53. */
		bits: bigint('bits', { mode: 'bigint', unsigned: true }).notNull()
	},
	(t) => [primaryKey({ columns: [t.nodeId, t.boot, t.block] })]
);

/** Partitioned by UTC day (custom SQL in the migration). No foreign keys: MariaDB allows none here. */
export const reading = mysqlTable(
	'reading',
	{
		nodeId: int('node_id').notNull(),
		atMs: atMs('at_ms').notNull(),
		boot: int('boot', { unsigned: true }).notNull(),
		seq: int('seq', { unsigned: true }).notNull(),
		row: tinyint('row', { unsigned: true }).notNull(),
		x: counts24('x').notNull(),
		y: counts24('y').notNull(),
		z: counts24('z').notNull(),
		polarity: tinyint('polarity').notNull(),
		/** 0.1 °C. */
		tempDc: smallint('temp_dc'),
		/** On the first row of a message only. */
		batteryMv: smallint('battery_mv', { unsigned: true }),
		rssiDbm: smallint('rssi_dbm'),
		/** Bit 0 clipped, 1 shifted by clock, 2 clockless, 3 unsigned, 4 moves no state (older than 14 days, or a late boot without a clock). */
		flags: tinyint('flags', { unsigned: true }).notNull().default(0)
	},
	(t) => [primaryKey({ columns: [t.nodeId, t.atMs, t.boot, t.seq, t.row] })]
);

/** Hourly rollup, kept as data arrives (late rows included). */
export const readingHour = mysqlTable(
	'reading_hour',
	{
		nodeId: int('node_id')
			.notNull()
			.references(() => node.id),
		hourMs: atMs('hour_ms').notNull(),
		n: int('n').notNull(),
		xSum: double('x_sum').notNull(),
		ySum: double('y_sum').notNull(),
		zSum: double('z_sum').notNull(),
		xMin: counts24('x_min').notNull(),
		yMin: counts24('y_min').notNull(),
		zMin: counts24('z_min').notNull(),
		xMax: counts24('x_max').notNull(),
		yMax: counts24('y_max').notNull(),
		zMax: counts24('z_max').notNull(),
		tempSumDc: int('temp_sum_dc').notNull().default(0),
		tempN: int('temp_n').notNull().default(0),
		batteryMinMv: smallint('battery_min_mv', { unsigned: true })
	},
	(t) => [primaryKey({ columns: [t.nodeId, t.hourMs] })]
);

/** Hours whose late rows wait for a background replay. */
export const replayHour = mysqlTable(
	'replay_hour',
	{
		nodeId: int('node_id')
			.notNull()
			.references(() => node.id),
		hourMs: atMs('hour_ms').notNull(),
		markedAtMs: atMs('marked_at_ms').notNull()
	},
	(t) => [primaryKey({ columns: [t.nodeId, t.hourMs] })]
);

/** A SET/RESET pair, or the pulse of an ack or a power-on (then set/reset are null). */
export const pulse = mysqlTable(
	'pulse',
	{
		nodeId: int('node_id')
			.notNull()
			.references(() => node.id),
		boot: int('boot', { unsigned: true }).notNull(),
		seq: int('seq', { unsigned: true }).notNull(),
		atMs: atMs('at_ms').notNull(),
		source: mysqlEnum('source', ['pair', 'ack', 'hello']).notNull(),
		setX: counts24('set_x'),
		setY: counts24('set_y'),
		setZ: counts24('set_z'),
		resetX: counts24('reset_x'),
		resetY: counts24('reset_y'),
		resetZ: counts24('reset_z'),
		/** Polarity held before: 1, -1, 0 = not known; null = key 20 did not come. */
		beforeP: tinyint('before_p'),
		beforeX: counts24('before_x'),
		beforeY: counts24('before_y'),
		beforeZ: counts24('before_z'),
		afterX: counts24('after_x'),
		afterY: counts24('after_y'),
		afterZ: counts24('after_z'),
		/** Polarity that the film holds afterwards: 1 after SET, pair and power-on, -1 after RESET. */
		polarityAfter: tinyint('polarity_after').notNull().default(1),
		/** false: too old, or a late boot without a clock; kept, moves no state. */
		moving: boolean('moving').notNull().default(true),
		tempDc: smallint('temp_dc'),
		batteryMv: smallint('battery_mv', { unsigned: true }),
		commandId: fixedBytes('command_id', { length: 8 }),
		/** null = not judged yet. */
		accepted: boolean('accepted'),
		refusal: varchar('refusal', { length: 120 })
	},
	(t) => [
		primaryKey({ columns: [t.nodeId, t.boot, t.seq] }),
		index('pulse_node_at').on(t.nodeId, t.atMs)
	]
);

export const boot = mysqlTable(
	'boot',
	{
		nodeId: int('node_id')
			.notNull()
			.references(() => node.id),
		boot: int('boot', { unsigned: true }).notNull(),
		atMs: atMs('at_ms').notNull(),
		firmware: varchar('firmware', { length: 64 }),
		profileCode: varchar('profile_code', { length: 32 }),
		cause: varchar('cause', { length: 64 })
	},
	(t) => [primaryKey({ columns: [t.nodeId, t.boot] })]
);

export const command = mysqlTable(
	'command',
	{
		id: fixedBytes('id', { length: 8 }).primaryKey(),
		nodeId: int('node_id')
			.notNull()
			.references(() => node.id),
		verb: mysqlEnum('verb', ['set', 'reset', 'pair', 'report']).notNull(),
		periodS: int('period_s'),
		deltaMg: int('delta_mg'),
		boot: int('boot', { unsigned: true }).notNull(),
		/** Why it was made: 'ask', 'learning', 'habit', 'calibrate', 'diagnose', 'refresh:<id>' … */
		cause: varchar('cause', { length: 64 }).notNull(),
		byActor: varchar('by_actor', { length: 64 }).notNull(),
		createdAtMs: atMs('created_at_ms').notNull(),
		expiresAtMs: atMs('expires_at_ms').notNull(),
		sentAtMs: atMs('sent_at_ms'),
		sends: smallint('sends').notNull().default(0),
		answeredAtMs: atMs('answered_at_ms'),
		outcome: tinyint('outcome'),
		reason: varchar('reason', { length: 200 })
	},
	(t) => [
		index('command_node').on(t.nodeId, t.createdAtMs),
		index('command_open').on(t.answeredAtMs, t.expiresAtMs)
	]
);

/** Per-node counters that a person may want to see; approximate, flushed with batches. */
export const nodeCount = mysqlTable(
	'node_count',
	{
		nodeId: int('node_id')
			.notNull()
			.references(() => node.id),
		dayMs: atMs('day_ms').notNull(),
		messages: int('messages').notNull().default(0),
		duplicates: int('duplicates').notNull().default(0),
		rejected: int('rejected').notNull().default(0),
		txFrames: int('tx_frames').notNull().default(0),
		txRadioMs: int('tx_radio_ms').notNull().default(0),
		pulses: int('pulses').notNull().default(0),
		batteryMinMv: smallint('battery_min_mv', { unsigned: true }),
		tempMeanC: float('temp_mean_c')
	},
	(t) => [primaryKey({ columns: [t.nodeId, t.dayMs] })]
);
