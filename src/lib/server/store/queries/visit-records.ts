import type { RECORDING_KINDS } from '../schema';
import { run, select, type Sql } from './bulk';

export interface RecordingRow {
	id: string;
	stopId: number;
	personId: number | null;
	kind: (typeof RECORDING_KINDS)[number];
	code: string;
	amount: number;
	text: string;
	madeAtMs: number;
	takenAtMs: number;
	added: number;
}

const RECORDINGS = `SELECT id, stop_id AS stopId, person_id AS personId, kind, code, amount, text,
	made_at_ms AS madeAtMs, taken_at_ms AS takenAtMs, added FROM visit_recording`;

export async function byId(sql: Sql, id: string): Promise<RecordingRow | null> {
	const rows = await select<RecordingRow>(sql, `${RECORDINGS} WHERE id = ?`, [id]);
	return rows[0] ?? null;
}

/** In the order in which they were made. */
export async function ofStops(sql: Sql, stopIds: readonly number[]): Promise<RecordingRow[]> {
	if (stopIds.length === 0) return [];
	return await select<RecordingRow>(
		sql,
		`${RECORDINGS} WHERE stop_id IN (?) ORDER BY made_at_ms, taken_at_ms, id`,
		[stopIds]
	);
}

export async function insert(
	sql: Sql,
	row: Omit<RecordingRow, 'added'> & { added: boolean }
): Promise<void> {
	await run(
		sql,
		`INSERT INTO visit_recording (id, stop_id, person_id, kind, code, amount, text, made_at_ms, taken_at_ms, added)
		 VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?, ?)`,
		[
			...[row.id, row.stopId, row.personId, row.kind, row.code, row.amount, row.text],
			...[row.madeAtMs, row.takenAtMs, row.added]
		]
	);
}

export interface PhotoRow {
	id: string;
	stopId: number;
	personId: number | null;
	file: string | null;
	sentSha256: string;
	widthPx: number;
	heightPx: number;
	sizeBytes: number;
	madeAtMs: number;
	takenAtMs: number;
	added: number;
}

const PHOTO_COLUMNS = `f.id, f.stop_id AS stopId, f.person_id AS personId, f.file, f.sent_sha256 AS sentSha256,
	f.width_px AS widthPx, f.height_px AS heightPx, f.size_bytes AS sizeBytes, f.made_at_ms AS madeAtMs,
	f.taken_at_ms AS takenAtMs, f.added`;

/** A photo by the phone's id, wherever it belongs. */
export async function photoById(sql: Sql, id: string): Promise<PhotoRow | null> {
	const rows = await select<PhotoRow>(
		sql,
		`SELECT ${PHOTO_COLUMNS} FROM visit_photo f WHERE f.id = ?`,
		[id]
	);
	return rows[0] ?? null;
}

/** A photo that is still there, of this walk of this site. */
export async function photoOf(
	sql: Sql,
	o: { siteId: number; visitId: number; id: string }
): Promise<(PhotoRow & { file: string }) | null> {
	const rows = await select<PhotoRow & { file: string }>(
		sql,
		`SELECT ${PHOTO_COLUMNS} FROM visit_photo f JOIN visit_stop s ON s.id = f.stop_id
		 JOIN visit v ON v.id = s.visit_id
		 WHERE f.id = ? AND v.id = ? AND v.site_id = ? AND f.file IS NOT NULL`,
		[o.id, o.visitId, o.siteId]
	);
	return rows[0] ?? null;
}

export async function photosOf(sql: Sql, stopIds: readonly number[]): Promise<PhotoRow[]> {
	if (stopIds.length === 0) return [];
	return await select<PhotoRow>(
		sql,
		`SELECT ${PHOTO_COLUMNS} FROM visit_photo f WHERE f.stop_id IN (?) AND f.file IS NOT NULL ORDER BY f.made_at_ms, f.id`,
		[stopIds]
	);
}

export async function insertPhoto(
	sql: Sql,
	row: Omit<PhotoRow, 'added'> & { added: boolean }
): Promise<void> {
	await run(
		sql,
		`INSERT INTO visit_photo (id, stop_id, person_id, file, sent_sha256, width_px, height_px, size_bytes,
			made_at_ms, taken_at_ms, added) VALUES (?, ?, ?, ?, ?, ?, ?, ?, ?, ?, ?)`,
		[
			...[row.id, row.stopId, row.personId, row.file, row.sentSha256, row.widthPx, row.heightPx],
			...[row.sizeBytes, row.madeAtMs, row.takenAtMs, row.added]
		]
	);
}

/** The row stays, so that the phone's id is not taken twice; its files may go. */
export async function dropPhoto(sql: Sql, id: string): Promise<void> {
	await run(sql, 'UPDATE visit_photo SET file = NULL WHERE id = ?', [id]);
}

export async function photoCount(sql: Sql, stopId: number): Promise<number> {
	const rows = await select<{ n: number }>(
		sql,
		'SELECT COUNT(*) AS n FROM visit_photo WHERE stop_id = ? AND file IS NOT NULL',
		[stopId]
	);
	return Number(rows[0]?.n ?? 0);
}
