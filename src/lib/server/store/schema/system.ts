import {
	index,
	int,
	mysqlEnum,
	mysqlTable,
	mediumtext,
	smallint,
	varchar
} from 'drizzle-orm/mysql-core';
import { atMs, blob, bytes, fixedBytes } from './columns';

/** Single values of the installation: secret check value, data layout … */
export const installation = mysqlTable('installation', {
	name: varchar('name', { length: 64 }).primaryKey(),
	value: bytes('value', { length: 512 }).notNull()
});

/** Who runs the one pipeline of this deployment. */
export const lease = mysqlTable('lease', {
	name: varchar('name', { length: 64 }).primaryKey(),
	holder: varchar('holder', { length: 64 }).notNull(),
	untilMs: atMs('until_ms').notNull()
});

/** Stretches of time in which the server could hear nodes; silence counts only inside them. */
export const hearing = mysqlTable('hearing', {
	fromMs: atMs('from_ms').primaryKey(),
	toMs: atMs('to_ms').notNull()
});

export const REJECTIONS = [
	'too_large',
	'not_decodable',
	'wrong_type',
	'too_many_rows',
	'out_of_range',
	'unknown_serial',
	'bad_tag',
	'unsigned_not_allowed',
	'bad_topic',
	'withdrawn'
] as const;

/** Rejected messages kept for a person to see: at most 20 an hour a node. */
export const rejected = mysqlTable(
	'rejected',
	{
		id: int('id').autoincrement().primaryKey(),
		atMs: atMs('at_ms').notNull(),
		serial: varchar('serial', { length: 32 }).notNull(),
		nodeId: int('node_id'),
		topic: varchar('topic', { length: 120 }).notNull(),
		reason: mysqlEnum('reason', REJECTIONS).notNull(),
		detail: varchar('detail', { length: 200 }),
		/** The first 512 bytes. */
		head: bytes('head', { length: 512 }).notNull(),
		lengthBytes: int('length_bytes').notNull()
	},
	(t) => [index('rejected_serial').on(t.serial, t.atMs)]
);

/** One queue for everything that leaves: mail now, webhooks later. */
export const outbox = mysqlTable(
	'outbox',
	{
		id: int('id').autoincrement().primaryKey(),
		kind: mysqlEnum('kind', ['mail', 'webhook']).notNull(),
		/** Sealed JSON (mails carry one-time links). */
		payloadSealed: blob('payload_sealed').notNull(),
		dedupe: fixedBytes('dedupe', { length: 16 }).unique(),
		createdAtMs: atMs('created_at_ms').notNull(),
		notBeforeMs: atMs('not_before_ms').notNull(),
		leaseUntilMs: atMs('lease_until_ms'),
		tries: smallint('tries').notNull().default(0),
		lastError: mediumtext('last_error'),
		/** SMTP reply code or HTTP status of the last try; 0 = none came. */
		lastCode: smallint('last_code'),
		/** For people: whom a mail is for and what of; its text is sealed. */
		personId: int('person_id'),
		messageId: varchar('message_id', { length: 120 }),
		about: varchar('about', { length: 200 }).notNull().default(''),
		sentAtMs: atMs('sent_at_ms'),
		givenUpAtMs: atMs('given_up_at_ms')
	},
	(t) => [
		index('outbox_due').on(t.sentAtMs, t.givenUpAtMs, t.notBeforeMs),
		index('outbox_person').on(t.personId, t.createdAtMs)
	]
);
