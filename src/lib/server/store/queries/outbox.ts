import { and, asc, desc, eq, inArray, isNull, lt, lte, or, sql } from 'drizzle-orm';
import type { Database } from '../connect';
import { outbox, person } from '../schema';
import { select, type Sql } from './bulk';
import type { Db } from './people';

export interface Queued {
	kind: 'mail' | 'webhook';
	payloadSealed: Buffer;
	dedupe: Buffer | null;
	/** For people: whom it is for and what it is about; null and '' where that says too much. */
	personId?: number | null;
	messageId?: string | null;
	about?: string;
}

/** One that has the dedupe of another is that other: nothing is added. */
export async function add(db: Db, row: Queued, nowMs: number): Promise<void> {
	await db
		.insert(outbox)
		.values({ ...row, createdAtMs: nowMs, notBeforeMs: nowMs })
		.onDuplicateKeyUpdate({ set: { id: sql`${outbox.id}` } });
}

export type Claimed = Pick<
	typeof outbox.$inferSelect,
	'id' | 'payloadSealed' | 'tries' | 'createdAtMs'
>;

/**
 * Takes what is due under a lease and lets go of the rows at once: nothing is sent inside a
 * transaction. Two senders never take the same row; one that dies gives it back when its lease ends.
 */
export async function claim(
	db: Database,
	kind: Queued['kind'],
	o: { nowMs: number; leaseMs: number; limit: number }
): Promise<Claimed[]> {
	return await db.transaction(async (tx) => {
		const rows = await tx
			.select({
				id: outbox.id,
				payloadSealed: outbox.payloadSealed,
				tries: outbox.tries,
				createdAtMs: outbox.createdAtMs
			})
			.from(outbox)
			.where(
				and(
					eq(outbox.kind, kind),
					isNull(outbox.sentAtMs),
					isNull(outbox.givenUpAtMs),
					lte(outbox.notBeforeMs, o.nowMs),
					or(isNull(outbox.leaseUntilMs), lt(outbox.leaseUntilMs, o.nowMs))
				)
			)
			.orderBy(asc(outbox.notBeforeMs))
			.limit(o.limit)
			.for('update', { skipLocked: true });
		if (rows.length > 0) {
			await tx
				.update(outbox)
				.set({ leaseUntilMs: o.nowMs + o.leaseMs, tries: sql`${outbox.tries} + 1` })
				.where(
					inArray(
						outbox.id,
						rows.map((r) => r.id)
					)
				);
		}
		return rows;
	});
}

/** The content goes with it: it may hold a one-time link. */
export async function sent(db: Db, id: number, nowMs: number): Promise<void> {
	await db
		.update(outbox)
		.set({
			...{ sentAtMs: nowMs, leaseUntilMs: null, lastError: null, lastCode: null },
			payloadSealed: Buffer.alloc(0)
		})
		.where(eq(outbox.id, id));
}

export interface Failure {
	error: string;
	/** SMTP reply or HTTP status; 0 = none came. */
	code: number;
	notBeforeMs: number;
	givenUpAtMs: number | null;
}

export async function failed(db: Db, id: number, failure: Failure): Promise<void> {
	await db
		.update(outbox)
		.set({
			lastError: failure.error,
			lastCode: failure.code,
			notBeforeMs: failure.notBeforeMs,
			givenUpAtMs: failure.givenUpAtMs,
			leaseUntilMs: null
		})
		.where(eq(outbox.id, id));
}

export interface Failing {
	personId: number;
	email: string;
	sinceMs: number;
	mails: number;
	error: string;
}

/** People with a mail given up, or refused for good (5xx), and none delivered since it was tried. */
export async function failing(sql: Sql, sinceMs: number): Promise<Failing[]> {
	return await select<Failing>(
		sql,
		`SELECT o.person_id AS personId, p.email, MIN(o.created_at_ms) AS sinceMs, COUNT(*) AS mails,
			SUBSTRING(MAX(o.last_error), 1, 200) AS error
		 FROM outbox o JOIN person p ON p.id = o.person_id AND p.switched_off_at_ms IS NULL
		 WHERE o.kind = 'mail' AND o.sent_at_ms IS NULL AND o.created_at_ms > ?
			AND (o.given_up_at_ms IS NOT NULL OR o.last_code >= 500)
			AND NOT EXISTS (SELECT 1 FROM outbox later
				WHERE later.person_id = o.person_id AND later.sent_at_ms > o.created_at_ms)
		 GROUP BY o.person_id, p.email`,
		[sinceMs]
	);
}

/** What waits, failed or was given up, the newest first: for an admin to look at. */
export async function troubles(db: Db, limit: number) {
	return await db
		.select({
			id: outbox.id,
			to: person.email,
			about: outbox.about,
			createdAtMs: outbox.createdAtMs,
			tries: outbox.tries,
			lastCode: outbox.lastCode,
			lastError: outbox.lastError,
			notBeforeMs: outbox.notBeforeMs,
			givenUpAtMs: outbox.givenUpAtMs
		})
		.from(outbox)
		.leftJoin(person, eq(person.id, outbox.personId))
		.where(and(eq(outbox.kind, 'mail'), isNull(outbox.sentAtMs)))
		.orderBy(desc(outbox.id))
		.limit(limit);
}
