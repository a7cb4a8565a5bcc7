import { and, asc, eq, inArray, isNull, lt, lte, or, sql } from 'drizzle-orm';
import type { Database } from '../connect';
import { outbox } from '../schema';
import type { Db } from './people';

export interface Queued {
	kind: 'mail' | 'webhook';
	payloadSealed: Buffer;
	dedupe: Buffer | null;
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
		.set({ sentAtMs: nowMs, leaseUntilMs: null, lastError: null, payloadSealed: Buffer.alloc(0) })
		.where(eq(outbox.id, id));
}

export async function failed(
	db: Db,
	id: number,
	o: { error: string; notBeforeMs: number; givenUpAtMs: number | null }
): Promise<void> {
	await db
		.update(outbox)
		.set({
			lastError: o.error,
			notBeforeMs: o.notBeforeMs,
			givenUpAtMs: o.givenUpAtMs,
			leaseUntilMs: null
		})
		.where(eq(outbox.id, id));
}
