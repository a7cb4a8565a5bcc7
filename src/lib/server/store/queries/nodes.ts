import { and, asc, eq, gt, inArray, isNull, or } from 'drizzle-orm';
import { bay, bayState, node, nodeFast, profile, reference, site } from '../schema';
import type { Db } from './people';

export type NodeRow = typeof node.$inferSelect;

export async function bySerial(db: Db, serial: string): Promise<NodeRow | null> {
	const rows = await db.select().from(node).where(eq(node.serial, serial));
	return rows[0] ?? null;
}

export async function byId(db: Db, id: number): Promise<NodeRow | null> {
	const rows = await db.select().from(node).where(eq(node.id, id));
	return rows[0] ?? null;
}

const summary = {
	id: node.id,
	serial: node.serial,
	siteSlug: site.slug,
	bayCode: bay.code,
	personal: bay.personal,
	profileCode: node.profileCode,
	gateway: node.gateway,
	condition: bayState.condition,
	also: bayState.also,
	preCommissioned: node.preCommissioned,
	unsignedAllowed: node.unsignedAllowed,
	firmware: node.firmware,
	heardAtMs: nodeFast.heardAtMs,
	placedAtMs: node.placedAtMs,
	withdrawnAtMs: node.withdrawnAtMs
};
export type NodeSummaryRow = Awaited<ReturnType<typeof page>>[number];

/** Nodes of a site by id, after a cursor. Nodes of personal bays only where those may be seen. */
export async function page(
	db: Db,
	o: { siteId: number; personal: boolean; afterId: number; limit: number }
) {
	return await joined(db)
		.where(
			and(
				eq(node.siteId, o.siteId),
				gt(node.id, o.afterId),
				o.personal ? undefined : or(isNull(bay.personal), eq(bay.personal, false))
			)
		)
		.orderBy(asc(node.id))
		.limit(o.limit);
}

export async function summaryOf(db: Db, nodeId: number): Promise<NodeSummaryRow | null> {
	const rows = await joined(db).where(eq(node.id, nodeId));
	return rows[0] ?? null;
}

const joined = (db: Db) =>
	db
		.select(summary)
		.from(node)
		.innerJoin(site, eq(site.id, node.siteId))
		.leftJoin(bay, eq(bay.id, node.bayId))
		.leftJoin(bayState, and(eq(bayState.bayId, node.bayId), eq(bayState.nodeId, node.id)))
		.leftJoin(nodeFast, eq(nodeFast.nodeId, node.id));

/** What was last heard of a node, with the scale it is read by. */
export async function lastHeard(db: Db, nodeId: number) {
	const rows = await db
		.select({
			heardAtMs: nodeFast.heardAtMs,
			lastAtMs: nodeFast.lastAtMs,
			x: nodeFast.x,
			y: nodeFast.y,
			z: nodeFast.z,
			polarity: nodeFast.polarity,
			tempDc: nodeFast.tempDc,
			batteryMv: nodeFast.batteryMv,
			profileBody: profile.body
		})
		.from(node)
		.innerJoin(profile, eq(profile.code, node.profileCode))
		.leftJoin(nodeFast, eq(nodeFast.nodeId, node.id))
		.where(eq(node.id, nodeId));
	return rows[0] ?? null;
}

export async function profileBody(db: Db, code: string): Promise<string | null> {
	const rows = await db.select({ body: profile.body }).from(profile).where(eq(profile.code, code));
	return rows[0]?.body ?? null;
}

/** The newest reference that is not superseded. */
export async function currentReference(db: Db, nodeId: number) {
	const rows = await db
		.select()
		.from(reference)
		.where(and(eq(reference.nodeId, nodeId), isNull(reference.supersededAtMs)))
		.orderBy(asc(reference.learnedAtMs));
	return rows.at(-1) ?? null;
}

export interface NewNode {
	serial: string;
	siteId: number;
	profileCode: string;
	gateway: string | null;
	mqttHash: Buffer;
	preCommissioned: boolean;
	unsignedAllowed: boolean;
}

export async function create(db: Db, values: NewNode, nowMs: number): Promise<number> {
	const [{ insertId }] = await db.insert(node).values({ ...values, createdAtMs: nowMs });
	return insertId;
}

/** The sealed key is bound to the node's id, so it can only be written once that is known. */
export async function setKey(db: Db, id: number, keySealed: Buffer): Promise<void> {
	await db.update(node).set({ keySealed }).where(eq(node.id, id));
}

/** The present key becomes the former one until `untilMs`. */
export async function replaceKey(
	db: Db,
	row: NodeRow,
	fresh: { keySealed: Buffer; mqttHash: Buffer },
	untilMs: number
): Promise<void> {
	await db
		.update(node)
		.set({
			...fresh,
			keyPrevSealed: row.keySealed,
			mqttHashPrev: row.mqttHash,
			keyPrevUntilMs: untilMs
		})
		.where(eq(node.id, row.id));
}

export type NodeValues = Partial<
	Pick<NodeRow, 'profileCode' | 'gateway' | 'headingDeg' | 'eastM' | 'northM' | 'unsignedAllowed'>
>;

export async function patch(db: Db, id: number, values: NodeValues): Promise<void> {
	if (Object.keys(values).length > 0) await db.update(node).set(values).where(eq(node.id, id));
}

/** Serials among these that are registered already, at whatever site. */
export async function taken(db: Db, serials: readonly string[]): Promise<string[]> {
	const rows = await db
		.select({ serial: node.serial })
		.from(node)
		.where(inArray(node.serial, [...serials]));
	return rows.map((row) => row.serial);
}

export async function profileCodes(db: Db): Promise<string[]> {
	return (await db.select({ code: profile.code }).from(profile)).map((row) => row.code);
}

/** The living node of a bay. */
export async function ofBay(db: Db, bayId: number): Promise<NodeRow | null> {
	const rows = await db
		.select()
		.from(node)
		.where(and(eq(node.bayId, bayId), isNull(node.withdrawnAtMs)));
	return rows[0] ?? null;
}
