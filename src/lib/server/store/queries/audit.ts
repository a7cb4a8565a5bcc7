import { desc, lt } from 'drizzle-orm';
import { audit } from '../schema';
import type { Db } from './people';

export interface AuditEntry {
	/** 'person:<id>', 'key:<id>' or 'rule'. */
	actor: string;
	siteId?: number | null;
	/** A verb in the past with dots: 'person.invited', 'key.made', 'site.removed' … */
	what: string;
	subject: string;
	detail?: Record<string, unknown>;
}

/** Never holds a secret: callers give names and ids, not keys and passwords. */
export async function note(db: Db, entry: AuditEntry, nowMs: number): Promise<void> {
	await db.insert(audit).values({
		atMs: nowMs,
		actor: entry.actor,
		siteId: entry.siteId ?? null,
		what: entry.what,
		subject: entry.subject.slice(0, 120),
		detail: entry.detail === undefined ? null : JSON.stringify(entry.detail)
	});
}

export async function list(db: Db, beforeId: number | null, limit: number) {
	return await db
		.select()
		.from(audit)
		.where(beforeId === null ? undefined : lt(audit.id, beforeId))
		.orderBy(desc(audit.id))
		.limit(limit);
}
