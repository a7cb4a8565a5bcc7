import { and, eq, lt } from 'drizzle-orm';
import { idempotency } from '../schema';
import type { Db } from './people';

export interface StoredAnswer {
	requestHash: Buffer;
	status: number | null;
	answerSealed: Buffer | null;
	createdAtMs: number;
}

export async function find(db: Db, actor: string, idemKey: string): Promise<StoredAnswer | null> {
	const rows = await db
		.select({
			requestHash: idempotency.requestHash,
			status: idempotency.status,
			answerSealed: idempotency.answerSealed,
			createdAtMs: idempotency.createdAtMs
		})
		.from(idempotency)
		.where(and(eq(idempotency.actor, actor), eq(idempotency.idemKey, idemKey)));
	return rows[0] ?? null;
}

/**
 * Takes the key in the write's own transaction: a second request with it waits on the row until the
 * first has committed, and finds the answer; a killed server leaves no trace of either.
 */
export async function claim(
	db: Db,
	row: { actor: string; idemKey: string; requestHash: Buffer },
	nowMs: number
): Promise<void> {
	await db.insert(idempotency).values({ ...row, createdAtMs: nowMs });
}

export async function keep(
	db: Db,
	actor: string,
	idemKey: string,
	status: number,
	answerSealed: Buffer
): Promise<void> {
	await db
		.update(idempotency)
		.set({ status, answerSealed })
		.where(and(eq(idempotency.actor, actor), eq(idempotency.idemKey, idemKey)));
}

/** Removes one that is past its time, so that its key may be used anew. */
export async function forget(db: Db, actor: string, idemKey: string): Promise<void> {
	await db
		.delete(idempotency)
		.where(and(eq(idempotency.actor, actor), eq(idempotency.idemKey, idemKey)));
}

export async function purge(db: Db, beforeMs: number): Promise<void> {
	await db.delete(idempotency).where(lt(idempotency.createdAtMs, beforeMs)).limit(1000);
}
