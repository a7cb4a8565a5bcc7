import type { WISH_WHATS } from '../schema';
import { run, select, type Sql } from './bulk';

export type WishWhat = (typeof WISH_WHATS)[number];

export interface NewWish {
	personId: number;
	siteId: number | null;
	noticeId: number;
	what: WishWhat;
	detail?: string;
	dueMs: number;
}

const CHUNK = 2_000;

/** In the transaction of their cause: told when and only when that commits. */
export async function add(sql: Sql, wishes: readonly NewWish[], nowMs: number): Promise<void> {
	for (let at = 0; at < wishes.length; at += CHUNK)
		await run(
			sql,
			'INSERT INTO mail_wish (person_id, site_id, notice_id, what, detail, wished_at_ms, due_ms) VALUES ?',
			[
				wishes
					.slice(at, at + CHUNK)
					.map((w) => [
						...[w.personId, w.siteId, w.noticeId, w.what, (w.detail ?? '').slice(0, 600), nowMs],
						w.dueMs
					])
			]
		);
}

/** Whom something is due to, the longest waiting first. */
export async function duePairs(sql: Sql, nowMs: number, limit: number) {
	return await select<{ personId: number; siteId: number | null }>(
		sql,
		`SELECT person_id AS personId, site_id AS siteId FROM mail_wish
		 WHERE done_at_ms IS NULL AND due_ms <= ? GROUP BY person_id, site_id ORDER BY MIN(due_ms) LIMIT ?`,
		[nowMs, limit]
	);
}

export interface WishRow {
	id: number;
	noticeId: number;
	what: WishWhat;
	detail: string;
	wishedAtMs: number;
}

/** What is due to one person of one site, locked; what another composer has is left to it. */
export async function takeDue(
	sql: Sql,
	pair: { personId: number; siteId: number | null },
	nowMs: number
): Promise<WishRow[]> {
	return await select<WishRow>(
		sql,
		`SELECT id, notice_id AS noticeId, what, detail, wished_at_ms AS wishedAtMs FROM mail_wish
		 WHERE person_id = ? AND site_id <=> ? AND done_at_ms IS NULL AND due_ms <= ?
		 ORDER BY id LIMIT 2000 FOR UPDATE SKIP LOCKED`,
		[pair.personId, pair.siteId, nowMs]
	);
}

/** When the person was last mailed of something new of this site; null = never. */
export async function lastNewsMs(sql: Sql, pair: { personId: number; siteId: number | null }) {
	const rows = await select<{ atMs: number | null }>(
		sql,
		`SELECT MAX(done_at_ms) AS atMs FROM mail_wish WHERE person_id = ? AND site_id <=> ?
			AND done_at_ms IS NOT NULL AND message_id IS NOT NULL AND what IN ('opened', 'worse')`,
		[pair.personId, pair.siteId]
	);
	return rows[0]?.atMs ?? null;
}

export async function postpone(sql: Sql, ids: readonly number[], dueMs: number): Promise<void> {
	if (ids.length > 0)
		await run(sql, 'UPDATE mail_wish SET due_ms = ? WHERE id IN (?)', [dueMs, ids]);
}

/** `messageId` null: it was over before it was told. */
export async function done(
	sql: Sql,
	ids: readonly number[],
	messageId: string | null,
	nowMs: number
): Promise<void> {
	if (ids.length > 0)
		await run(sql, 'UPDATE mail_wish SET done_at_ms = ?, message_id = ? WHERE id IN (?)', [
			nowMs,
			messageId,
			ids
		]);
}

/** Mails that told a person of these nodes or notices before, oldest first: the thread. */
export async function thread(
	sql: Sql,
	personId: number,
	of: { nodeIds: readonly number[]; noticeIds: readonly number[] }
): Promise<string[]> {
	const rows = await select<{ messageId: string }>(
		sql,
		`SELECT w.message_id AS messageId
		 FROM (SELECT id FROM notice WHERE id IN (?) UNION SELECT id FROM notice WHERE node_id IN (?)) n
		 JOIN mail_wish w ON w.notice_id = n.id AND w.person_id = ? AND w.message_id IS NOT NULL
		 GROUP BY w.message_id ORDER BY MIN(w.id) LIMIT 50`,
		[of.noticeIds, of.nodeIds.length === 0 ? [0] : of.nodeIds, personId]
	);
	return rows.map(({ messageId }) => messageId);
}

/** Who was mailed of these notices, and the last thing that they were told. */
export async function lastTold(sql: Sql, noticeIds: readonly number[]) {
	if (noticeIds.length === 0) return [];
	return await select<{ noticeId: number; personId: number; what: WishWhat }>(
		sql,
		`SELECT w.notice_id AS noticeId, w.person_id AS personId, w.what FROM mail_wish w JOIN (
			SELECT MAX(id) AS id FROM mail_wish WHERE notice_id IN (?) AND message_id IS NOT NULL
			GROUP BY notice_id, person_id) last ON last.id = w.id`,
		[noticeIds]
	);
}

/** Who was told of each notice, or is going to be, and when; first words only. */
export async function toldOf(sql: Sql, noticeIds: readonly number[]) {
	if (noticeIds.length === 0) return [];
	return await select<{
		noticeId: number;
		personId: number;
		name: string;
		initials: string;
		toldAtMs: number | null;
		dueMs: number | null;
	}>(
		sql,
		`SELECT w.notice_id AS noticeId, w.person_id AS personId, p.name, p.initials,
			MIN(IF(w.message_id IS NULL, NULL, w.done_at_ms)) AS toldAtMs,
			MIN(IF(w.done_at_ms IS NULL, w.due_ms, NULL)) AS dueMs
		 FROM mail_wish w JOIN person p ON p.id = w.person_id
		 WHERE w.notice_id IN (?) AND w.what IN ('opened', 'worse', 'escalated')
		 GROUP BY w.notice_id, w.person_id, p.name, p.initials`,
		[noticeIds]
	);
}
