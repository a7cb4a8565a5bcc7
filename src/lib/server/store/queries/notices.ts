import type { NOTICE_ACTS, NOTICE_KINDS } from '../schema';
import { run, select, type Sql } from './bulk';

type Kind = (typeof NOTICE_KINDS)[number];
export type NoticeWhat = (typeof NOTICE_ACTS)[number];

export interface OpenRow {
	id: number;
	about: string;
	siteId: number | null;
	nodeId: number | null;
	bayId: number | null;
	kind: Kind;
	kinds: string;
	awaitsProof: number;
	openedAtMs: number;
	deadlineMs: number;
	stage: number;
	facts: string;
	takenBy: number | null;
	snoozedUntilMs: number | null;
}

const OPEN = `SELECT id, about, site_id AS siteId, node_id AS nodeId, bay_id AS bayId, kind, kinds,
	awaits_proof AS awaitsProof, opened_at_ms AS openedAtMs, deadline_ms AS deadlineMs, stage, facts,
	taken_by AS takenBy, snoozed_until_ms AS snoozedUntilMs FROM notice`;

/** Open notices of a site (null: of the installation), locked. */
export async function open(sql: Sql, siteId: number | null): Promise<OpenRow[]> {
	const where = siteId === null ? 'site_id IS NULL' : 'site_id = ?';
	return await select<OpenRow>(
		sql,
		`${OPEN} WHERE ${where} AND closed_at_ms IS NULL ORDER BY id FOR UPDATE`,
		siteId === null ? [] : [siteId]
	);
}

/** Those of these ids that are open, locked. */
export async function openByIds(sql: Sql, ids: readonly number[]): Promise<OpenRow[]> {
	if (ids.length === 0) return [];
	return await select<OpenRow>(
		sql,
		`${OPEN} WHERE id IN (?) AND closed_at_ms IS NULL ORDER BY id FOR UPDATE`,
		[ids]
	);
}

/** Open ones that nobody has and whose time is over. */
export async function overdue(sql: Sql, nowMs: number, limit: number): Promise<OpenRow[]> {
	return await select<OpenRow>(
		sql,
		`${OPEN} WHERE closed_at_ms IS NULL AND deadline_ms <= ? AND stage < 2 AND taken_by IS NULL
			AND (snoozed_until_ms IS NULL OR snoozed_until_ms <= ?) ORDER BY id LIMIT ? FOR UPDATE`,
		[nowMs, nowMs, limit]
	);
}

export interface NewNotice {
	siteId: number | null;
	nodeId: number | null;
	bayId: number | null;
	about: string;
	kind: Kind;
	kinds: string;
	awaitsProof: boolean;
	sinceMs: number;
	openedAtMs: number;
	deadlineMs: number;
	/** JSON text. */
	facts: string;
}

/** Rows a statement takes. */
const CHUNK = 1_000;

/** Returns the ids in order: one statement's rows get ids that follow each other (innodb_autoinc_lock_mode 1). */
export async function insert(sql: Sql, notices: readonly NewNotice[]): Promise<number[]> {
	const ids: number[] = [];
	for (let at = 0; at < notices.length; at += CHUNK) {
		const chunk = notices.slice(at, at + CHUNK);
		const { insertId } = await run(
			sql,
			`INSERT INTO notice (site_id, node_id, bay_id, subject, about, kind, kinds, awaits_proof, since_ms,
				opened_at_ms, deadline_ms, facts) VALUES ?`,
			[
				chunk.map((n) => [
					...[n.siteId, n.nodeId, n.bayId, n.about, n.about, n.kind, n.kinds, n.awaitsProof],
					...[n.sinceMs, n.openedAtMs, n.deadlineMs, n.facts]
				])
			]
		);
		ids.push(...chunk.map((_, i) => insertId + i));
	}
	return ids;
}

export interface NewEntry {
	noticeId: number;
	what: NoticeWhat;
	personId?: number | null;
	detail?: string;
}

export async function enter(sql: Sql, entries: readonly NewEntry[], atMs: number): Promise<void> {
	for (let at = 0; at < entries.length; at += CHUNK)
		await run(
			sql,
			'INSERT INTO notice_entry (notice_id, at_ms, what, person_id, detail) VALUES ?',
			[
				entries
					.slice(at, at + CHUNK)
					.map((e) => [
						...[e.noticeId, atMs, e.what, e.personId ?? null, (e.detail ?? '').slice(0, 600)]
					])
			]
		);
}

export async function change(
	sql: Sql,
	id: number,
	to: {
		kind: Kind;
		kinds: string;
		awaitsProof: boolean;
		facts: string | null;
		deadlineMs: number;
		/** Told anew: it is nobody's again only where nobody had it. */
		stage: number;
	}
): Promise<void> {
	await run(
		sql,
		`UPDATE notice SET kind = ?, kinds = ?, awaits_proof = ?, facts = COALESCE(?, facts),
			deadline_ms = ?, stage = ? WHERE id = ?`,
		[to.kind, to.kinds, to.awaitsProof, to.facts, to.deadlineMs, to.stage, id]
	);
}

export async function close(
	sql: Sql,
	ids: readonly number[],
	how: 'healed' | 'proved' | 'visit' | 'removed' | 'folded',
	nowMs: number
): Promise<void> {
	if (ids.length === 0) return;
	await run(
		sql,
		'UPDATE notice SET closed_at_ms = ?, closed_how = ?, subject = NULL WHERE id IN (?)',
		[nowMs, how, ids]
	);
}

/** Those of a site that closed by themselves since an instant, oldest first. */
export async function closedByItself(sql: Sql, siteId: number | null, sinceMs: number) {
	return await select<{
		about: string;
		id: number;
		kind: Kind;
		times: number;
		closedAtMs: number;
		deadlineMs: number;
	}>(
		sql,
		`SELECT about, id, kind, times, closed_at_ms AS closedAtMs, deadline_ms AS deadlineMs FROM notice
		 WHERE site_id <=> ? AND closed_at_ms > ? AND closed_how IN ('healed', 'folded') ORDER BY closed_at_ms`,
		[siteId, sinceMs]
	);
}

export async function reopen(
	sql: Sql,
	id: number,
	to: Pick<NewNotice, 'kind' | 'kinds' | 'awaitsProof' | 'sinceMs' | 'deadlineMs' | 'facts'>
): Promise<void> {
	await run(
		sql,
		`UPDATE notice SET subject = about, closed_at_ms = NULL, closed_how = NULL, times = times + 1, kind = ?,
			kinds = ?, awaits_proof = ?, since_ms = ?, deadline_ms = ?, facts = ? WHERE id = ?`,
		[to.kind, to.kinds, to.awaitsProof, to.sinceMs, to.deadlineMs, to.facts, id]
	);
}

export async function hold(
	sql: Sql,
	ids: readonly number[],
	to: { takenBy: number | null; takenAtMs: number | null }
): Promise<void> {
	await run(
		sql,
		'UPDATE notice SET taken_by = ?, taken_at_ms = ?, snoozed_until_ms = NULL WHERE id IN (?)',
		[to.takenBy, to.takenAtMs, ids]
	);
}

/** Until then it asks for nobody; its time goes on at least to there. */
export async function snooze(sql: Sql, ids: readonly number[], untilMs: number): Promise<void> {
	await run(
		sql,
		'UPDATE notice SET snoozed_until_ms = ?, deadline_ms = GREATEST(deadline_ms, ?) WHERE id IN (?)',
		[untilMs, untilMs, ids]
	);
}

export async function escalate(
	sql: Sql,
	id: number,
	to: { stage: number; deadlineMs: number }
): Promise<void> {
	await run(sql, 'UPDATE notice SET stage = ?, deadline_ms = ? WHERE id = ?', [
		to.stage,
		to.deadlineMs,
		id
	]);
}

/** Nodes told together as silent now: commands to them wait. */
export async function stormNodeIds(sql: Sql, siteIds: readonly number[]): Promise<Set<number>> {
	if (siteIds.length === 0) return new Set();
	const rows = await select<{ id: number }>(
		sql,
		`SELECT n.id FROM notice t
		 JOIN node n ON n.site_id = t.site_id
		 JOIN bay b ON b.id = n.bay_id
		 JOIN zone z ON z.id = b.zone_id
		 LEFT JOIN node_network w ON w.node_id = n.id
		 JOIN bay_state s ON s.bay_id = b.id AND FIND_IN_SET('silent', CONCAT(s.condition, ',', s.also))
		 WHERE t.site_id IN (?) AND t.closed_at_ms IS NULL AND t.kind IN ('silent', 'site_late') AND t.node_id IS NULL
			AND (t.kind = 'site_late' OR t.about IN (CONCAT('storm:', t.site_id, ':site:'),
				CONCAT('storm:', t.site_id, ':gateway:', n.gateway),
				CONCAT('storm:', t.site_id, ':network:', w.network), CONCAT('storm:', t.site_id, ':zone:', z.code)))`,
		[siteIds]
	);
	return new Set(rows.map(({ id }) => id));
}
