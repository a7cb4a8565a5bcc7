import { and, asc, eq, gt, inArray, isNull, sql } from 'drizzle-orm';
import { bay, bayState, closure, node, zone } from '../schema';
import { select, type Sql } from './bulk';
import type { Db } from './people';

export type BayRow = typeof bay.$inferSelect;

export async function byId(db: Db, id: number): Promise<BayRow | null> {
	const rows = await db.select().from(bay).where(eq(bay.id, id));
	return rows[0] ?? null;
}

/** A living bay. */
export async function byCode(db: Db, siteId: number, code: string): Promise<BayRow | null> {
	const rows = await db
		.select()
		.from(bay)
		.where(and(eq(bay.siteId, siteId), eq(bay.code, code), eq(bay.removedAtMs, 0)));
	return rows[0] ?? null;
}

/** Living bays of these codes. */
export async function byCodes(db: Db, siteId: number, codes: readonly string[]): Promise<BayRow[]> {
	if (codes.length === 0) return [];
	return await db
		.select()
		.from(bay)
		.where(and(eq(bay.siteId, siteId), inArray(bay.code, [...codes]), eq(bay.removedAtMs, 0)));
}

export async function ofZone(db: Db, siteId: number, zoneCode: string): Promise<BayRow[]> {
	const rows = await db
		.select({ bay })
		.from(bay)
		.innerJoin(zone, eq(zone.id, bay.zoneId))
		.where(and(eq(bay.siteId, siteId), eq(zone.code, zoneCode), eq(bay.removedAtMs, 0)));
	return rows.map((row) => row.bay);
}

const view = {
	id: bay.id,
	code: bay.code,
	zone: zone.code,
	zoneId: bay.zoneId,
	personal: bay.personal,
	geometry: bay.geometry,
	state: bayState.state,
	sinceMs: bayState.sinceMs,
	confidence20: bayState.confidence20,
	doubtReason: bayState.doubtReason,
	doubtSinceMs: bayState.doubtSinceMs,
	condition: bayState.condition,
	also: bayState.also,
	lastKnownState: bayState.lastKnownState,
	lastKnownAtMs: bayState.lastKnownAtMs,
	evidence: bayState.evidence,
	serial: node.serial,
	nodeId: node.id
};

const joined = (db: Db) =>
	db
		.select(view)
		.from(bay)
		.innerJoin(zone, eq(zone.id, bay.zoneId))
		.leftJoin(bayState, eq(bayState.bayId, bay.id))
		.leftJoin(node, and(eq(node.bayId, bay.id), isNull(node.withdrawnAtMs)));

export type BayViewRow = Awaited<ReturnType<typeof joined>>[number];

export interface BayPage {
	siteId: number;
	/** Whether personal bays are among them. */
	personal: boolean;
	afterId: number;
	limit: number;
}

/** Living bays by id, after a cursor. */
export async function page(db: Db, o: BayPage): Promise<BayViewRow[]> {
	return await joined(db)
		.where(
			and(
				eq(bay.siteId, o.siteId),
				eq(bay.removedAtMs, 0),
				gt(bay.id, o.afterId),
				o.personal ? undefined : eq(bay.personal, false)
			)
		)
		.orderBy(asc(bay.id))
		.limit(o.limit);
}

export async function views(db: Db, ids: readonly number[]): Promise<BayViewRow[]> {
	if (ids.length === 0) return [];
	return await joined(db)
		.where(inArray(bay.id, [...ids]))
		.orderBy(asc(bay.id));
}

export interface ChangedBay {
	bayId: number;
	code: string;
	/** To be told as removed: it is gone, or has become personal and may not be seen. */
	gone: boolean;
}

/**
 * Bays that the log names in (after, upTo], by id, after a cursor. One that is gone and whose code
 * lives on in another bay is left out: the code is not gone. To a reader who may not see personal
 * bays their changes are nothing at all, but for the one that made them personal.
 */
export async function changed(
	sqlc: Sql,
	o: BayPage & { after: number; upTo: number }
): Promise<ChangedBay[]> {
	const seen = o.personal
		? ''
		: `AND (b.personal = FALSE OR EXISTS (SELECT 1 FROM \`change\` g WHERE g.bay_id = b.id
			AND g.id > ? AND g.id <= ? AND g.kind = 'geometry'))`;
	const rows = await select<{ bayId: number; code: string; removed: number; personal: number }>(
		sqlc,
		`SELECT b.id AS bayId, b.code, b.removed_at_ms > 0 AS removed, b.personal
		 FROM bay b JOIN (SELECT DISTINCT bay_id FROM \`change\` WHERE site_id = ? AND id > ? AND id <= ? AND bay_id > ?) c
			ON c.bay_id = b.id
		 LEFT JOIN bay n ON b.removed_at_ms > 0 AND n.site_id = b.site_id AND n.code = b.code AND n.removed_at_ms = 0
		 WHERE n.id IS NULL ${seen} ORDER BY b.id LIMIT ?`,
		[o.siteId, o.after, o.upTo, o.afterId, ...(o.personal ? [] : [o.after, o.upTo]), o.limit]
	);
	return rows.map(({ bayId, code, removed, personal }) => ({
		bayId,
		code,
		gone: Number(removed) === 1 || (!o.personal && Number(personal) === 1)
	}));
}

export interface RunningClosure {
	bayId: number;
	fromMs: number;
	toMs: number;
	reason: string;
}

/** Closures of a site that run at a time; the first of a bay counts. */
export async function closedAt(
	db: Db,
	siteId: number,
	atMs: number
): Promise<Map<number, RunningClosure>> {
	const rows = await db
		.select({
			bayId: closure.bayId,
			fromMs: closure.fromMs,
			toMs: closure.toMs,
			reason: closure.reason
		})
		.from(closure)
		.where(
			and(
				eq(closure.siteId, siteId),
				isNull(closure.liftedAtMs),
				sql`${closure.fromMs} <= ${atMs}`,
				gt(closure.toMs, atMs)
			)
		)
		.orderBy(asc(closure.fromMs));
	const map = new Map<number, RunningClosure>();
	for (const row of rows) if (!map.has(row.bayId)) map.set(row.bayId, row);
	return map;
}

export interface NewBay {
	siteId: number;
	zoneId: number;
	code: string;
	geometry: string | null;
	personal: boolean;
}

/** With a state each: unknown, until a node says otherwise. Returns their ids. */
export async function create(db: Db, rows: readonly NewBay[], nowMs: number): Promise<number[]> {
	const first = rows[0];
	if (first === undefined) return [];
	await db.insert(bay).values(rows.map((row) => ({ ...row, createdAtMs: nowMs })));
	const codes = rows.map((row) => row.code);
	const ids = (await byCodes(db, first.siteId, codes)).map((row) => row.id);
	await db.insert(bayState).values(ids.map((bayId) => ({ bayId, siteId: first.siteId })));
	return ids;
}

export async function patch(
	db: Db,
	id: number,
	values: Partial<Pick<BayRow, 'code' | 'zoneId' | 'geometry' | 'personal'>>
): Promise<void> {
	if (Object.keys(values).length > 0) await db.update(bay).set(values).where(eq(bay.id, id));
}

export async function remove(db: Db, id: number, nowMs: number): Promise<void> {
	await db.update(bay).set({ removedAtMs: nowMs }).where(eq(bay.id, id));
}

export interface CountRow {
	zoneCode: string;
	zoneName: string;
	bays: number;
	personal: number;
	occupied: number;
	vacant: number;
	unknown: number;
	closed: number;
	doubtful: number;
}

/** Counts by zone; closed bays are in none of the states. */
export async function counts(
	sqlc: Sql,
	siteId: number,
	personal: boolean,
	nowMs: number
): Promise<CountRow[]> {
	const only = personal ? '' : 'AND b.personal = FALSE';
	const of = (condition: string) => `CAST(COALESCE(SUM(${condition}), 0) AS SIGNED)`;
	return await select<CountRow>(
		sqlc,
		`SELECT z.code AS zoneCode, z.name AS zoneName, COUNT(b.id) AS bays, ${of('b.personal')} AS personal,
			${of("c.bay_id IS NULL AND s.state = 'occupied'")} AS occupied,
			${of("c.bay_id IS NULL AND s.state = 'vacant'")} AS vacant,
			${of("b.id IS NOT NULL AND c.bay_id IS NULL AND COALESCE(s.state, 'unknown') = 'unknown'")} AS unknown,
			${of('c.bay_id IS NOT NULL')} AS closed,
			${of('s.doubt_reason IS NOT NULL')} AS doubtful
		 FROM zone z
		 LEFT JOIN bay b ON b.zone_id = z.id AND b.removed_at_ms = 0 ${only}
		 LEFT JOIN bay_state s ON s.bay_id = b.id
		 LEFT JOIN (SELECT DISTINCT bay_id FROM closure WHERE site_id = ? AND lifted_at_ms IS NULL
			AND from_ms <= ? AND to_ms > ?) c ON c.bay_id = b.id
		 WHERE z.site_id = ? GROUP BY z.id, z.code, z.name ORDER BY z.code`,
		[siteId, nowMs, nowMs, siteId]
	);
}
