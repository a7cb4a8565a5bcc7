import type { VISIT_CAUSES } from '../schema';
import { run, select, type Sql } from './bulk';

type Cause = (typeof VISIT_CAUSES)[number];

export interface NewAsk {
	siteId: number;
	bayId: number;
	nodeId: number | null;
	cause: Cause;
	/** In words, '' where the cause says it all. */
	detail: string;
	/** What the request is called where causes are not shown. */
	reason: string;
	/** null = a rule. */
	askedBy: number | null;
	atMs: number;
}

/** One open request a bay: a second cause is added to it, one that holds already is not repeated. */
export async function ask(sql: Sql, wanted: NewAsk): Promise<{ id: number; fresh: boolean }> {
	const there = await select<{ id: number }>(
		sql,
		'SELECT id FROM visit_request WHERE bay_id = ? AND ended_at_ms IS NULL FOR UPDATE',
		[wanted.bayId]
	);
	const open = there[0]?.id;
	const id = open ?? (await create(sql, wanted));
	await addCause(sql, id, wanted);
	return { id, fresh: open === undefined };
}

async function create(sql: Sql, wanted: NewAsk): Promise<number> {
	const { insertId } = await run(
		sql,
		'INSERT INTO visit_request (site_id, bay_id, node_id, reason, asked_by, asked_at_ms) VALUES (?, ?, ?, ?, (SELECT id FROM person WHERE id = ?), ?)',
		[
			...[wanted.siteId, wanted.bayId, wanted.nodeId, wanted.reason.slice(0, 400)],
			...[wanted.askedBy, wanted.atMs]
		]
	);
	return insertId;
}

export async function addCause(
	sql: Sql,
	requestId: number,
	{ cause, detail, atMs }: Pick<NewAsk, 'cause' | 'detail' | 'atMs'>
): Promise<void> {
	const held = await select<{ id: number }>(
		sql,
		'SELECT id FROM visit_cause WHERE request_id = ? AND cause = ? AND detail = ? AND ended_at_ms IS NULL',
		[requestId, cause, detail.slice(0, 400)]
	);
	if (held.length > 0) return;
	await run(sql, 'INSERT INTO visit_cause (request_id, cause, detail, at_ms) VALUES (?, ?, ?, ?)', [
		requestId,
		cause,
		detail.slice(0, 400),
		atMs
	]);
}

export interface CauseRow {
	id: number;
	requestId: number;
	cause: Cause;
	detail: string;
	atMs: number;
	endedAtMs: number | null;
}

export async function causesOf(sql: Sql, requestIds: readonly number[]): Promise<CauseRow[]> {
	if (requestIds.length === 0) return [];
	return await select<CauseRow>(
		sql,
		`SELECT id, request_id AS requestId, cause, detail, at_ms AS atMs, ended_at_ms AS endedAtMs
		 FROM visit_cause WHERE request_id IN (?) ORDER BY at_ms, id`,
		[requestIds]
	);
}

export async function endCauses(sql: Sql, ids: readonly number[], atMs: number): Promise<void> {
	if (ids.length === 0) return;
	await run(sql, 'UPDATE visit_cause SET ended_at_ms = ? WHERE id IN (?) AND ended_at_ms IS NULL', [
		atMs,
		ids
	]);
}

export interface RequestRow {
	id: number;
	siteId: number;
	bayId: number;
	bay: string;
	zone: string;
	geometry: string | null;
	nodeId: number | null;
	serial: string | null;
	profile: string | null;
	reason: string;
	askedAtMs: number;
	takenBy: number | null;
	takerName: string | null;
	takerInitials: string | null;
	endedAtMs: number | null;
	/** The walk that has it now. */
	visitId: number | null;
}

/** The node is the one that lies there now, not the one of the day it was asked. */
const ROWS = `SELECT r.id, r.site_id AS siteId, r.bay_id AS bayId, b.code AS bay, z.code AS zone, b.geometry,
	n.id AS nodeId, n.serial, n.profile_code AS profile, r.reason, r.asked_at_ms AS askedAtMs,
	r.taken_by AS takenBy, p.name AS takerName, p.initials AS takerInitials, r.ended_at_ms AS endedAtMs,
	(SELECT MAX(s.visit_id) FROM visit_stop s WHERE s.request_id = r.id AND s.ended_at_ms IS NULL) AS visitId
	FROM visit_request r
	JOIN bay b ON b.id = r.bay_id
	JOIN zone z ON z.id = b.zone_id
	LEFT JOIN node n ON n.bay_id = b.id AND n.withdrawn_at_ms IS NULL
	LEFT JOIN person p ON p.id = r.taken_by`;

/** Open requests of these sites, the oldest first; bays that are gone are left out. */
export async function open(sql: Sql, siteIds: readonly number[]): Promise<RequestRow[]> {
	if (siteIds.length === 0) return [];
	return await select<RequestRow>(
		sql,
		`${ROWS} WHERE r.site_id IN (?) AND r.ended_at_ms IS NULL AND b.removed_at_ms = 0 ORDER BY r.asked_at_ms, r.id`,
		[siteIds]
	);
}

export async function byIds(sql: Sql, ids: readonly number[]): Promise<RequestRow[]> {
	if (ids.length === 0) return [];
	return await select<RequestRow>(sql, `${ROWS} WHERE r.id IN (?)`, [ids]);
}

export interface Locked {
	id: number;
	siteId: number;
	bayId: number;
	takenBy: number | null;
	endedAtMs: number | null;
}

/** Locked to the end of the transaction, in the order of their ids. */
export async function lock(sql: Sql, siteId: number, ids: readonly number[]): Promise<Locked[]> {
	if (ids.length === 0) return [];
	return await select<Locked>(
		sql,
		`SELECT id, site_id AS siteId, bay_id AS bayId, taken_by AS takenBy, ended_at_ms AS endedAtMs
		 FROM visit_request WHERE site_id = ? AND id IN (?) ORDER BY id FOR UPDATE`,
		[siteId, ids]
	);
}

export async function hold(
	sql: Sql,
	ids: readonly number[],
	by: number | null,
	atMs: number
): Promise<void> {
	if (ids.length === 0) return;
	await run(sql, 'UPDATE visit_request SET taken_by = ?, taken_at_ms = ? WHERE id IN (?)', [
		by,
		by === null ? null : atMs,
		ids
	]);
}

export async function end(
	sql: Sql,
	id: number,
	ended: { by: number | null; atMs: number; outcome: string }
): Promise<void> {
	await run(
		sql,
		'UPDATE visit_request SET ended_by = ?, ended_at_ms = ?, outcome = ? WHERE id = ?',
		[ended.by, ended.atMs, ended.outcome.slice(0, 400), id]
	);
	await run(
		sql,
		'UPDATE visit_cause SET ended_at_ms = ? WHERE request_id = ? AND ended_at_ms IS NULL',
		[ended.atMs, id]
	);
}

/** A notice that may send somebody, with when each set of its kinds began to hold. */
export interface CallingNotice {
	id: number;
	nodeId: number;
	bayId: number;
	bay: string;
	kinds: string;
}
export interface KindsEntry {
	noticeId: number;
	atMs: number;
	kinds: string;
}

export async function callingNotices(sql: Sql, siteId: number) {
	const notices = await select<CallingNotice>(
		sql,
		`SELECT t.id, t.node_id AS nodeId, t.bay_id AS bayId, b.code AS bay, t.kinds FROM notice t
		 JOIN bay b ON b.id = t.bay_id AND b.removed_at_ms = 0
		 WHERE t.site_id = ? AND t.closed_at_ms IS NULL AND t.node_id IS NOT NULL
			AND t.kinds REGEXP 'silent|clipped|low_cell|refresh_not_cured'`,
		[siteId]
	);
	const ids = notices.map(({ id }) => id);
	const entries =
		ids.length === 0
			? []
			: await select<KindsEntry>(
					sql,
					`SELECT notice_id AS noticeId, at_ms AS atMs, detail AS kinds FROM notice_entry
					 WHERE notice_id IN (?) AND what IN ('opened', 'kind', 'awaits_proof') ORDER BY id`,
					[ids]
				);
	return { notices, entries };
}
