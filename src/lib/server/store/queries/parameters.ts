import { and, desc, eq, isNull, lt, or } from 'drizzle-orm';
import { bay, node, parameter } from '../schema';
import type { Db } from './people';

export type ParameterRow = typeof parameter.$inferSelect;

/** A setting's place: a site, or one node of it. */
export interface Scope {
	siteId: number;
	nodeId: number | null;
}

const ofScope = ({ siteId, nodeId }: Scope) =>
	and(
		eq(parameter.siteId, siteId),
		nodeId === null ? isNull(parameter.nodeId) : eq(parameter.nodeId, nodeId)
	);

/** The override in force of one setting, held until the transaction ends. */
export async function inForce(db: Db, scope: Scope, name: string): Promise<ParameterRow | null> {
	const rows = await db
		.select()
		.from(parameter)
		.where(and(ofScope(scope), eq(parameter.name, name), isNull(parameter.untilMs)))
		.for('update');
	return rows[0] ?? null;
}

/** The newest override of one setting made before `id`, or of all with null. */
export async function newest(
	db: Db,
	scope: Scope,
	name: string,
	beforeId: number | null
): Promise<ParameterRow | null> {
	const rows = await db
		.select()
		.from(parameter)
		.where(
			and(
				ofScope(scope),
				eq(parameter.name, name),
				beforeId === null ? undefined : lt(parameter.id, beforeId)
			)
		)
		.orderBy(desc(parameter.id))
		.limit(1);
	return rows[0] ?? null;
}

export async function byId(db: Db, siteId: number, id: number): Promise<ParameterRow | null> {
	const rows = await db
		.select()
		.from(parameter)
		.where(and(eq(parameter.id, id), eq(parameter.siteId, siteId)))
		.for('update');
	return rows[0] ?? null;
}

export async function begin(
	db: Db,
	wanted: Scope & { name: string; value: number; byActor: string; why: string },
	atMs: number
): Promise<number> {
	const [{ insertId }] = await db
		.insert(parameter)
		.values({ ...wanted, value: String(wanted.value), fromMs: atMs });
	return insertId;
}

export async function end(
	db: Db,
	id: number,
	by: { actor: string; why: string },
	atMs: number
): Promise<void> {
	await db
		.update(parameter)
		.set({ untilMs: atMs, endedBy: by.actor, endedWhy: by.why })
		.where(eq(parameter.id, id));
}

const MOST_CHANGES = 500;

/** Changes of a site and its nodes, or of a site and one node, newest first. */
export async function changes(db: Db, siteId: number, nodeId: number | null) {
	return await db
		.select({
			row: parameter,
			serial: node.serial,
			bay: bay.code,
			personal: bay.personal
		})
		.from(parameter)
		.leftJoin(node, eq(node.id, parameter.nodeId))
		.leftJoin(bay, eq(bay.id, node.bayId))
		.where(
			and(
				eq(parameter.siteId, siteId),
				nodeId === null ? undefined : or(isNull(parameter.nodeId), eq(parameter.nodeId, nodeId))
			)
		)
		.orderBy(desc(parameter.id))
		.limit(MOST_CHANGES);
}

/** All overrides in force of a site and its nodes. */
export async function allInForce(db: Db, siteId: number): Promise<ParameterRow[]> {
	return await db
		.select()
		.from(parameter)
		.where(and(eq(parameter.siteId, siteId), isNull(parameter.untilMs)));
}
