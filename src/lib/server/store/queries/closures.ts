import { and, asc, eq, gt, isNull, or } from 'drizzle-orm';
import { bay, closure } from '../schema';
import type { Db } from './people';

const view = {
	id: closure.id,
	bayId: closure.bayId,
	bay: bay.code,
	fromMs: closure.fromMs,
	toMs: closure.toMs,
	reason: closure.reason,
	liftedAtMs: closure.liftedAtMs
};
export type ClosureRow = {
	id: number;
	bayId: number;
	bay: string;
	fromMs: number;
	toMs: number;
	reason: string;
	liftedAtMs: number | null;
};

/** Closures not over and not lifted, by id, after a cursor. */
export async function page(
	db: Db,
	o: { siteId: number; personal: boolean; afterId: number; limit: number; nowMs: number }
): Promise<ClosureRow[]> {
	return await db
		.select(view)
		.from(closure)
		.innerJoin(bay, eq(bay.id, closure.bayId))
		.where(
			and(
				eq(closure.siteId, o.siteId),
				gt(closure.id, o.afterId),
				gt(closure.toMs, o.nowMs),
				isNull(closure.liftedAtMs),
				eq(bay.removedAtMs, 0),
				o.personal ? undefined : eq(bay.personal, false)
			)
		)
		.orderBy(asc(closure.id))
		.limit(o.limit);
}

export async function byId(db: Db, siteId: number, id: number) {
	const rows = await db
		.select()
		.from(closure)
		.where(and(eq(closure.id, id), eq(closure.siteId, siteId)));
	return rows[0] ?? null;
}

/** Of a bay, running or to come, that overlaps [fromMs, toMs). */
export async function overlapping(
	db: Db,
	bayId: number,
	fromMs: number,
	toMs: number
): Promise<boolean> {
	const rows = await db
		.select({ id: closure.id, fromMs: closure.fromMs })
		.from(closure)
		.where(
			and(
				eq(closure.bayId, bayId),
				or(isNull(closure.liftedAtMs), gt(closure.liftedAtMs, fromMs)),
				gt(closure.toMs, fromMs)
			)
		);
	return rows.some((row) => row.fromMs < toMs);
}

export interface NewClosure {
	siteId: number;
	bayId: number;
	fromMs: number;
	toMs: number;
	reason: string;
}

/** `setAct` follows: closure and act name each other. */
export async function create(db: Db, row: NewClosure): Promise<number> {
	const [{ insertId }] = await db.insert(closure).values({ ...row, actId: 0 });
	return insertId;
}

export async function setAct(db: Db, id: number, actId: number): Promise<void> {
	await db.update(closure).set({ actId }).where(eq(closure.id, id));
}

export async function lift(db: Db, id: number, atMs: number): Promise<void> {
	await db.update(closure).set({ liftedAtMs: atMs }).where(eq(closure.id, id));
}
