import {
	boolean,
	index,
	int,
	mediumtext,
	mysqlEnum,
	mysqlTable,
	primaryKey,
	smallint,
	text,
	varchar
} from 'drizzle-orm/mysql-core';
import { atMs, blob, fixedBytes } from './columns';
import { site } from './site';

export const ROLES = ['operator', 'maintenance', 'integrator', 'admin'] as const;

export const person = mysqlTable('person', {
	id: int('id').autoincrement().primaryKey(),
	email: varchar('email', { length: 254 }).notNull().unique(),
	name: varchar('name', { length: 120 }).notNull(),
	initials: varchar('initials', { length: 4 }).notNull(),
	role: mysqlEnum('role', ROLES).notNull(),
	allSites: boolean('all_sites').notNull().default(false),
	/** argon2id; null until the invitation is taken up. */
	passwordHash: varchar('password_hash', { length: 200 }),
	/** Raised on password, role, reach or switch-off; a session with another number is over. */
	sessionVersion: int('session_version').notNull().default(1),
	mustChangePassword: boolean('must_change_password').notNull().default(false),
	demo: boolean('demo').notNull().default(false),
	language: varchar('language', { length: 8 }).notNull().default('en'),
	timezone: varchar('timezone', { length: 64 }),
	createdAtMs: atMs('created_at_ms').notNull(),
	switchedOffAtMs: atMs('switched_off_at_ms')
});

export const personSite = mysqlTable(
	'person_site',
	{
		personId: int('person_id')
			.notNull()
			.references(() => person.id),
		siteId: int('site_id')
			.notNull()
			.references(() => site.id),
		lastSeenAtMs: atMs('last_seen_at_ms')
	},
	(t) => [primaryKey({ columns: [t.personId, t.siteId] })]
);

/** When a person last looked at a site's plan: for 'Since you were last here'. */
export const lastLook = mysqlTable(
	'last_look',
	{
		personId: int('person_id')
			.notNull()
			.references(() => person.id),
		siteId: int('site_id')
			.notNull()
			.references(() => site.id),
		changeId: atMs('change_id').notNull(),
		atMs: atMs('at_ms').notNull()
	},
	(t) => [primaryKey({ columns: [t.personId, t.siteId] })]
);

/** One-time links: invitation and password reset. Only a hash is stored. */
export const ticket = mysqlTable('ticket', {
	hash: fixedBytes('hash', { length: 32 }).primaryKey(),
	personId: int('person_id')
		.notNull()
		.references(() => person.id),
	purpose: mysqlEnum('purpose', ['invitation', 'reset']).notNull(),
	createdAtMs: atMs('created_at_ms').notNull(),
	expiresAtMs: atMs('expires_at_ms').notNull(),
	usedAtMs: atMs('used_at_ms')
});

export const apiKey = mysqlTable('api_key', {
	id: int('id').autoincrement().primaryKey(),
	/** The `<id>` of `lodekeep_<id>_<secret>`. */
	publicId: varchar('public_id', { length: 16 }).notNull().unique(),
	secretHash: fixedBytes('secret_hash', { length: 32 }).notNull(),
	name: varchar('name', { length: 120 }).notNull(),
	/** Space separated. */
	scopes: varchar('scopes', { length: 120 }).notNull(),
	allSites: boolean('all_sites').notNull().default(false),
	/** Space separated origins for CORS. */
	origins: text('origins'),
	personalAllowed: boolean('personal_allowed').notNull().default(false),
	makerId: int('maker_id').references(() => person.id),
	createdAtMs: atMs('created_at_ms').notNull(),
	expiresAtMs: atMs('expires_at_ms'),
	revokedAtMs: atMs('revoked_at_ms')
});

export const apiKeySite = mysqlTable(
	'api_key_site',
	{
		keyId: int('key_id')
			.notNull()
			.references(() => apiKey.id),
		siteId: int('site_id')
			.notNull()
			.references(() => site.id)
	},
	(t) => [primaryKey({ columns: [t.keyId, t.siteId] })]
);

/** Answers kept for 24 h so that a repeated write is answered, not done again. */
export const idempotency = mysqlTable(
	'idempotency',
	{
		/** 'key:<id>' or 'person:<id>'. */
		actor: varchar('actor', { length: 64 }).notNull(),
		idemKey: varchar('idem_key', { length: 128 }).notNull(),
		requestHash: fixedBytes('request_hash', { length: 32 }).notNull(),
		/** null while the first request is still being served. */
		status: smallint('status'),
		answerSealed: blob('answer_sealed'),
		createdAtMs: atMs('created_at_ms').notNull()
	},
	(t) => [
		primaryKey({ columns: [t.actor, t.idemKey] }),
		index('idempotency_created').on(t.createdAtMs)
	]
);

export const audit = mysqlTable(
	'audit',
	{
		id: int('id').autoincrement().primaryKey(),
		atMs: atMs('at_ms').notNull(),
		actor: varchar('actor', { length: 64 }).notNull(),
		siteId: int('site_id'),
		what: varchar('what', { length: 64 }).notNull(),
		subject: varchar('subject', { length: 120 }).notNull(),
		detail: mediumtext('detail')
	},
	(t) => [index('audit_at').on(t.atMs), index('audit_site').on(t.siteId, t.atMs)]
);
