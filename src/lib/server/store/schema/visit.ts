import { index, int, mysqlTable, varchar } from 'drizzle-orm/mysql-core';
import { bay } from './bay';
import { atMs } from './columns';
import { person } from './people';
import { site } from './site';

/** 'Send someone': a bay that wants a person on the spot, who has taken it, and what was done there. */
export const visitRequest = mysqlTable(
	'visit_request',
	{
		id: int('id').autoincrement().primaryKey(),
		siteId: int('site_id')
			.notNull()
			.references(() => site.id),
		bayId: int('bay_id')
			.notNull()
			.references(() => bay.id),
		nodeId: int('node_id'),
		reason: varchar('reason', { length: 400 }).notNull(),
		/** null = a rule: a film refresh that failed twice. */
		askedBy: int('asked_by').references(() => person.id),
		askedAtMs: atMs('asked_at_ms').notNull(),
		takenBy: int('taken_by').references(() => person.id),
		takenAtMs: atMs('taken_at_ms'),
		endedBy: int('ended_by').references(() => person.id),
		endedAtMs: atMs('ended_at_ms'),
		/** What was done or found, in words. */
		outcome: varchar('outcome', { length: 400 })
	},
	(t) => [
		index('visit_request_site').on(t.siteId, t.endedAtMs),
		index('visit_request_bay').on(t.bayId)
	]
);
