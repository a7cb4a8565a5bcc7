import type { VISIT_OUTCOMES } from '../schema';
import { run, select, type Sql } from './bulk';

type Outcome = (typeof VISIT_OUTCOMES)[number];

export interface WalkRow {
	id: number;
	siteId: number;
	takenBy: number | null;
	takerName: string | null;
	takerInitials: string | null;
	takenAtMs: number;
	endedAtMs: number | null;
}

const WALKS = `SELECT v.id, v.site_id AS siteId, v.taken_by AS takenBy, p.name AS takerName,
	p.initials AS takerInitials, v.taken_at_ms AS takenAtMs, v.ended_at_ms AS endedAtMs
	FROM visit v LEFT JOIN person p ON p.id = v.taken_by`;

export async function byId(sql: Sql, siteId: number, id: number): Promise<WalkRow | null> {
	const rows = await select<WalkRow>(sql, `${WALKS} WHERE v.id = ? AND v.site_id = ?`, [
		id,
		siteId
	]);
	return rows[0] ?? null;
}

export interface WalkCount extends WalkRow {
	stops: number;
	done: number;
}

const COUNTED = WALKS.replace(
	'FROM visit v',
	`, (SELECT COUNT(*) FROM visit_stop s WHERE s.visit_id = v.id) AS stops,
	(SELECT COUNT(*) FROM visit_stop s WHERE s.visit_id = v.id AND s.ended_at_ms IS NOT NULL) AS done
	FROM visit v`
);

export async function open(sql: Sql, siteIds: readonly number[]): Promise<WalkCount[]> {
	if (siteIds.length === 0) return [];
	return await select<WalkCount>(
		sql,
		`${COUNTED} WHERE v.site_id IN (?) AND v.ended_at_ms IS NULL ORDER BY v.taken_at_ms`,
		[siteIds]
	);
}

export async function ended(sql: Sql, siteId: number, limit: number): Promise<WalkCount[]> {
	return await select<WalkCount>(
		sql,
		`${COUNTED} WHERE v.site_id = ? AND v.ended_at_ms IS NOT NULL ORDER BY v.ended_at_ms DESC LIMIT ?`,
		[siteId, limit]
	);
}

/** The person's open walk of a site, made where there is none; one at a time by the row of the site. */
export async function ownOpen(
	sql: Sql,
	siteId: number,
	personId: number,
	nowMs: number
): Promise<number> {
	await select(sql, 'SELECT id FROM site WHERE id = ? FOR UPDATE', [siteId]);
	const rows = await select<{ id: number }>(
		sql,
		'SELECT id FROM visit WHERE site_id = ? AND taken_by = ? AND ended_at_ms IS NULL ORDER BY id DESC LIMIT 1',
		[siteId, personId]
	);
	if (rows[0] !== undefined) return rows[0].id;
	const { insertId } = await run(
		sql,
		'INSERT INTO visit (site_id, taken_by, taken_at_ms) VALUES (?, ?, ?)',
		[siteId, personId, nowMs]
	);
	return insertId;
}

export async function endWalk(sql: Sql, id: number, atMs: number): Promise<void> {
	await run(sql, 'UPDATE visit SET ended_at_ms = ? WHERE id = ? AND ended_at_ms IS NULL', [
		atMs,
		id
	]);
}

/** A stop that was handed back and is taken again goes on where it was. */
export async function addStop(sql: Sql, visitId: number, requestId: number): Promise<void> {
	await run(
		sql,
		`INSERT INTO visit_stop (visit_id, request_id, place) VALUES (?, ?, 0)
		 ON DUPLICATE KEY UPDATE outcome = NULL, ended_by = NULL, ended_at_ms = NULL, recorded_at_ms = NULL`,
		[visitId, requestId]
	);
}

export interface StopRow {
	id: number;
	visitId: number;
	requestId: number;
	place: number;
	outcome: Outcome | null;
	note: string;
	endedBy: number | null;
	endedAtMs: number | null;
	recordedAtMs: number | null;
}

const STOPS = `SELECT id, visit_id AS visitId, request_id AS requestId, place, outcome, note,
	ended_by AS endedBy, ended_at_ms AS endedAtMs, recorded_at_ms AS recordedAtMs FROM visit_stop`;

export async function stopsOf(sql: Sql, visitId: number): Promise<StopRow[]> {
	return await select<StopRow>(sql, `${STOPS} WHERE visit_id = ? ORDER BY place, id`, [visitId]);
}

/** A stop of a walk of the site, locked with its walk. */
export async function lockStop(
	sql: Sql,
	o: { siteId: number; visitId: number; stopId: number }
): Promise<(StopRow & { walkTakenAtMs: number }) | null> {
	const walks = await select<{ takenAtMs: number }>(
		sql,
		'SELECT taken_at_ms AS takenAtMs FROM visit WHERE id = ? AND site_id = ? FOR UPDATE',
		[o.visitId, o.siteId]
	);
	const walk = walks[0];
	if (walk === undefined) return null;
	const rows = await select<StopRow>(sql, `${STOPS} WHERE id = ? AND visit_id = ? FOR UPDATE`, [
		o.stopId,
		o.visitId
	]);
	return rows[0] === undefined ? null : { ...rows[0], walkTakenAtMs: walk.takenAtMs };
}

/** One at a time writes to a walk; the first statement, so that what is read after it is of now. */
export async function lockWalk(sql: Sql, id: number): Promise<void> {
	await select(sql, 'SELECT id FROM visit WHERE id = ? FOR UPDATE', [id]);
}

export async function bayOfStop(sql: Sql, stopId: number): Promise<number | null> {
	const rows = await select<{ bayId: number }>(
		sql,
		'SELECT r.bay_id AS bayId FROM visit_stop s JOIN visit_request r ON r.id = s.request_id WHERE s.id = ?',
		[stopId]
	);
	return rows[0]?.bayId ?? null;
}

/** The stop of an open request that is under way. */
export async function runningStop(sql: Sql, requestId: number): Promise<StopRow | null> {
	const rows = await select<StopRow>(
		sql,
		`${STOPS} WHERE request_id = ? AND ended_at_ms IS NULL ORDER BY id DESC LIMIT 1 FOR UPDATE`,
		[requestId]
	);
	return rows[0] ?? null;
}

export async function setPlaces(
	sql: Sql,
	places: readonly { id: number; place: number }[]
): Promise<void> {
	for (const { id, place } of places)
		await run(sql, 'UPDATE visit_stop SET place = ? WHERE id = ?', [place, id]);
}

export async function endStop(
	sql: Sql,
	id: number,
	to: {
		outcome: Outcome | null;
		note: string;
		by: number | null;
		atMs: number;
		recordedAtMs: number;
	}
): Promise<void> {
	await run(
		sql,
		'UPDATE visit_stop SET outcome = ?, note = ?, ended_by = ?, ended_at_ms = ?, recorded_at_ms = ? WHERE id = ?',
		[to.outcome, to.note, to.by, to.atMs, to.recordedAtMs, id]
	);
}

/** A stop at which nothing was recorded leaves no trace when it is handed back. */
export async function dropBareStop(sql: Sql, id: number): Promise<boolean> {
	const { affectedRows } = await run(
		sql,
		`DELETE FROM visit_stop WHERE id = ?
		 AND NOT EXISTS (SELECT 1 FROM visit_recording r WHERE r.stop_id = ?)
		 AND NOT EXISTS (SELECT 1 FROM visit_photo f WHERE f.stop_id = ?)`,
		[id, id, id]
	);
	return affectedRows > 0;
}

/** Nodes of a site at which a stop was ended lately: what still shows there is given time to end. */
export async function seenToSince(sql: Sql, siteId: number, sinceMs: number): Promise<Set<number>> {
	const rows = await select<{ id: number }>(
		sql,
		`SELECT DISTINCT n.id FROM visit_request r JOIN node n ON n.bay_id = r.bay_id
		 WHERE r.site_id = ? AND r.ended_at_ms > ? AND r.ended_by IS NOT NULL`,
		[siteId, sinceMs]
	);
	return new Set(rows.map(({ id }) => id));
}
