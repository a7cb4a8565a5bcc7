import type { EVENT_TYPES } from '../schema';
import { run, select, type Sql } from './bulk';

export type ChangeKind =
	'event' | 'bay' | 'condition' | 'geometry' | 'closure' | 'removed' | 'site';

export interface NewChange {
	kind: ChangeKind;
	bayId: number | null;
	nodeId: number | null;
}

export interface Change extends NewChange {
	id: number;
	recordedAtMs: number;
}

/**
 * Takes `n` ids of a site's change log and returns the first. Inside the caller's transaction: the
 * site's row stays locked until its end, so ids have no gaps. Several sites: rising site ids.
 */
export async function allot(sql: Sql, siteId: number, n: number): Promise<number> {
	const header = await run(
		sql,
		'UPDATE site SET last_change = LAST_INSERT_ID(last_change + ?) WHERE id = ?',
		[n, siteId]
	);
	if (header.affectedRows !== 1) throw new RangeError(`No site ${siteId}.`);
	return header.insertId - n + 1;
}

/** Writes changes under ids that were allotted from `firstId` on. */
export async function write(
	sql: Sql,
	siteId: number,
	firstId: number,
	changes: readonly NewChange[],
	nowMs: number
): Promise<void> {
	if (changes.length === 0) return;
	await run(
		sql,
		'INSERT INTO `change` (site_id, id, kind, bay_id, node_id, recorded_at_ms) VALUES ?',
		[changes.map((c, i) => [siteId, firstId + i, c.kind, c.bayId, c.nodeId, nowMs])]
	);
}

/** For routes that change geometry, closures, sites: allots and writes. Returns the last id. */
export async function append(
	sql: Sql,
	siteId: number,
	changes: readonly NewChange[],
	nowMs: number
): Promise<number> {
	const firstId = await allot(sql, siteId, changes.length);
	await write(sql, siteId, firstId, changes, nowMs);
	return firstId + changes.length - 1;
}

export type ChangePage =
	| { ok: true; items: Change[]; /** The cursor for the next call. */ last: number }
	| { ok: false; reason: 'gone'; firstId: number }
	| { ok: false; reason: 'no_site' };

/**
 * The unbroken run of a site's log after `cursor`, at most `limit` long. A reader may see id n + 1
 * before n although n was allotted first; whatever lies behind a hole waits for the next call.
 */
export async function after(
	sql: Sql,
	siteId: number,
	cursor: number,
	limit: number
): Promise<ChangePage> {
	const [site] = await select<{ firstChange: number }>(
		sql,
		'SELECT first_change AS firstChange FROM site WHERE id = ?',
		[siteId]
	);
	if (site === undefined) return { ok: false, reason: 'no_site' };
	if (cursor < site.firstChange - 1)
		return { ok: false, reason: 'gone', firstId: site.firstChange };
	const rows = await select<Change>(
		sql,
		'SELECT id, kind, bay_id AS bayId, node_id AS nodeId, recorded_at_ms AS recordedAtMs FROM `change` WHERE site_id = ? AND id > ? ORDER BY id LIMIT ?',
		[siteId, cursor, limit]
	);
	const items = unbroken(rows, cursor);
	return { ok: true, items, last: items.at(-1)?.id ?? cursor };
}

/** The part of rising rows that follows `cursor` without a hole. */
export function unbroken<T extends { id: number }>(rows: readonly T[], cursor: number): T[] {
	const end = rows.findIndex((row, i) => row.id !== cursor + 1 + i);
	return end === -1 ? [...rows] : rows.slice(0, end);
}

/** Holes stand only among the newest ids: transactions that are just being committed. */
const HOLE_WINDOW = 1_000;

/**
 * The newest id up to which nothing is missing: what an answer gives as its cursor. Read it before
 * the data of that answer; what changes in between is then told twice rather than never.
 */
export async function cursor(sql: Sql, siteId: number): Promise<number> {
	const [site] = await select<{ last: number; first: number }>(
		sql,
		'SELECT last_change AS last, first_change AS first FROM site WHERE id = ?',
		[siteId]
	);
	if (site === undefined) return 0;
	const from = Math.max(site.first - 1, site.last - HOLE_WINDOW, 0);
	const rows = await select<{ id: number }>(
		sql,
		'SELECT id FROM `change` WHERE site_id = ? AND id > ? AND id <= ? ORDER BY id',
		[siteId, from, site.last]
	);
	return unbroken(rows, from).at(-1)?.id ?? from;
}

export interface NewEvent {
	bayId: number;
	nodeId: number | null;
	type: (typeof EVENT_TYPES)[number];
	state: 'vacant' | 'occupied' | 'unknown';
	atMs: number;
	confidence20: number | null;
	uncertaintyS: number;
	late: boolean;
	voids: number | null;
	/** JSON text. */
	evidence: string | null;
}

/** Writes events under allotted ids; their rows of the log are written with `write`. */
export async function writeEvents(
	sql: Sql,
	siteId: number,
	firstId: number,
	events: readonly NewEvent[],
	nowMs: number
): Promise<void> {
	if (events.length === 0) return;
	await run(
		sql,
		'INSERT INTO event (site_id, id, bay_id, type, state, at_ms, recorded_at_ms, confidence_20, uncertainty_s, late, voids, evidence) VALUES ?',
		[
			events.map((e, i) => [
				siteId,
				firstId + i,
				e.bayId,
				e.type,
				e.state,
				e.atMs,
				nowMs,
				e.confidence20,
				e.uncertaintyS,
				e.late,
				e.voids,
				e.evidence
			])
		]
	);
}
