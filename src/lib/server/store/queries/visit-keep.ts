import { run, select, type Sql } from './bulk';

/** Statements that take people off what ended before an instant; each stands by itself. */
const NAMES = [
	'UPDATE visit SET taken_by = NULL WHERE taken_by IS NOT NULL AND ended_at_ms < ?',
	'UPDATE visit_stop SET ended_by = NULL WHERE ended_by IS NOT NULL AND ended_at_ms < ?',
	'UPDATE visit_recording SET person_id = NULL WHERE person_id IS NOT NULL AND made_at_ms < ?',
	'UPDATE visit_photo SET person_id = NULL WHERE person_id IS NOT NULL AND made_at_ms < ?',
	'UPDATE visit_request SET ended_by = NULL, taken_by = NULL WHERE (ended_by IS NOT NULL OR taken_by IS NOT NULL) AND ended_at_ms < ?'
] as const;

export async function dropNames(sql: Sql, beforeMs: number): Promise<number> {
	let dropped = 0;
	for (const statement of NAMES) dropped += (await run(sql, statement, [beforeMs])).affectedRows;
	return dropped;
}

const DAY_MS = 86_400_000;

/** Photos older than their site keeps readings. */
export async function photosOver(sql: Sql, nowMs: number): Promise<{ id: string; file: string }[]> {
	return await select<{ id: string; file: string }>(
		sql,
		`SELECT f.id, f.file FROM visit_photo f JOIN visit_stop s ON s.id = f.stop_id
		 JOIN visit v ON v.id = s.visit_id JOIN site t ON t.id = v.site_id
		 WHERE f.file IS NOT NULL AND f.taken_at_ms < ? - t.reading_days * ?`,
		[nowMs, DAY_MS]
	);
}

export async function dropPhotos(sql: Sql, ids: readonly string[]): Promise<void> {
	if (ids.length > 0) await run(sql, 'UPDATE visit_photo SET file = NULL WHERE id IN (?)', [ids]);
}

export async function isKept(sql: Sql, file: string): Promise<boolean> {
	const rows = await select(sql, 'SELECT 1 FROM visit_photo WHERE file = ? LIMIT 1', [file]);
	return rows.length > 0;
}
