import { int, mysqlTable, primaryKey, varchar } from 'drizzle-orm/mysql-core';
import { atMs, fixedBytes } from './columns';
import { person } from './people';
import { site } from './site';

/** A read-only link for a screen across the room. Only a hash of its token is stored. */
export const wallLink = mysqlTable('wall_link', {
	id: int('id').autoincrement().primaryKey(),
	tokenHash: fixedBytes('token_hash', { length: 32 }).notNull().unique(),
	name: varchar('name', { length: 120 }).notNull(),
	/** Seconds a site stands before the next one; 0 = no turning. */
	turnS: int('turn_s').notNull().default(0),
	makerId: int('maker_id').references(() => person.id),
	createdAtMs: atMs('created_at_ms').notNull(),
	expiresAtMs: atMs('expires_at_ms'),
	revokedAtMs: atMs('revoked_at_ms')
});

/** The sites a link shows; removed sites are left out when it is opened. */
export const wallLinkSite = mysqlTable(
	'wall_link_site',
	{
		linkId: int('link_id')
			.notNull()
			.references(() => wallLink.id),
		siteId: int('site_id')
			.notNull()
			.references(() => site.id)
	},
	(t) => [primaryKey({ columns: [t.linkId, t.siteId] })]
);
