import { and, eq, gt, isNull } from 'drizzle-orm';
import { ticket } from '../schema';
import type { Db } from './people';

export type Purpose = 'invitation' | 'reset';

export interface NewTicket {
	hash: Buffer;
	personId: number;
	purpose: Purpose;
	expiresAtMs: number;
}

/** A new ticket makes those before it, of the same purpose, worthless. */
export async function create(db: Db, t: NewTicket, nowMs: number): Promise<void> {
	await db
		.update(ticket)
		.set({ usedAtMs: nowMs })
		.where(
			and(eq(ticket.personId, t.personId), eq(ticket.purpose, t.purpose), isNull(ticket.usedAtMs))
		);
	await db.insert(ticket).values({ ...t, createdAtMs: nowMs });
}

export async function find(db: Db, hash: Buffer, nowMs: number) {
	const rows = await db
		.select()
		.from(ticket)
		.where(and(eq(ticket.hash, hash), isNull(ticket.usedAtMs), gt(ticket.expiresAtMs, nowMs)));
	return rows[0] ?? null;
}

/** true for the one who used it first. */
export async function use(db: Db, hash: Buffer, nowMs: number): Promise<boolean> {
	const [{ affectedRows }] = await db
		.update(ticket)
		.set({ usedAtMs: nowMs })
		.where(and(eq(ticket.hash, hash), isNull(ticket.usedAtMs), gt(ticket.expiresAtMs, nowMs)));
	return affectedRows === 1;
}
