import { and, desc, eq } from 'drizzle-orm';
import { act, closure } from '../schema';
import type { Db } from './people';

export type ActRow = typeof act.$inferSelect;

/** The last act of a kind that concerned a node. */
export async function lastAct(
	db: Db,
	nodeId: number,
	kind: ActRow['kind']
): Promise<ActRow | null> {
	const rows = await db
		.select()
		.from(act)
		.where(and(eq(act.nodeId, nodeId), eq(act.kind, kind)))
		.orderBy(desc(act.recordedAtMs))
		.limit(1)
		.for('update');
	return rows[0] ?? null;
}

export async function actById(db: Db, siteId: number, id: number): Promise<ActRow | null> {
	const rows = await db
		.select()
		.from(act)
		.where(and(eq(act.id, id), eq(act.siteId, siteId)));
	return rows[0] ?? null;
}

export async function closureById(db: Db, siteId: number, id: number) {
	const rows = await db
		.select()
		.from(closure)
		.where(and(eq(closure.id, id), eq(closure.siteId, siteId)))
		.for('update');
	return rows[0] ?? null;
}

export async function liftClosure(db: Db, id: number, atMs: number): Promise<void> {
	await db.update(closure).set({ liftedAtMs: atMs }).where(eq(closure.id, id));
}
