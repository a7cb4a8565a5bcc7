import type { BayState, HistoryType } from '$lib/detection/types';
import { run, select, type Sql } from './bulk';

export interface HistoryRow {
	id: number;
	bayId: number;
	atMs: number;
	type: HistoryType;
	state: BayState;
	confidence20: number | null;
	uncertaintyS: number;
	/** JSON text. */
	evidence: string | null;
	decidedAtMs: number;
	voidedAtMs: number | null;
	recordedAtMs: number;
	voidRecordedAtMs: number | null;
	eventId: number | null;
}

export type NewHistory = Omit<HistoryRow, 'id'>;

const COLUMNS =
	'id, bay_id AS bayId, at_ms AS atMs, type, state, confidence_20 AS confidence20, uncertainty_s AS uncertaintyS, evidence, decided_at_ms AS decidedAtMs, voided_at_ms AS voidedAtMs, recorded_at_ms AS recordedAtMs, void_recorded_at_ms AS voidRecordedAtMs, event_id AS eventId';

export async function insert(sql: Sql, rows: readonly NewHistory[]): Promise<void> {
	if (rows.length === 0) return;
	await run(
		sql,
		'INSERT INTO history (bay_id, at_ms, type, state, confidence_20, uncertainty_s, evidence, decided_at_ms, voided_at_ms, recorded_at_ms, void_recorded_at_ms, event_id) VALUES ?',
		[
			rows.map((r) => [
				r.bayId,
				r.atMs,
				r.type,
				r.state,
				r.confidence20,
				r.uncertaintyS,
				r.evidence,
				r.decidedAtMs,
				r.voidedAtMs,
				r.recordedAtMs,
				r.voidRecordedAtMs,
				r.eventId
			])
		]
	);
}

/** The entry in force with this key, or null. */
export async function findEffective(
	sql: Sql,
	bayId: number,
	type: HistoryType,
	atMs: number
): Promise<HistoryRow | null> {
	const rows = await select<HistoryRow>(
		sql,
		`SELECT ${COLUMNS} FROM history WHERE bay_id = ? AND at_ms = ? AND type = ? AND voided_at_ms IS NULL ORDER BY id DESC LIMIT 1`,
		[bayId, atMs, type]
	);
	return rows[0] ?? null;
}

export async function voidEntry(
	sql: Sql,
	id: number,
	decidedAtMs: number,
	stampMs: number
): Promise<void> {
	await run(sql, 'UPDATE history SET voided_at_ms = ?, void_recorded_at_ms = ? WHERE id = ?', [
		decidedAtMs,
		stampMs,
		id
	]);
}

/** A bay, and from which event time on its history is the replayed node's. */
export interface BaySpan {
	bayId: number;
	fromMs: number;
}

const spans = (bays: readonly BaySpan[]): string =>
	`(${bays.map(({ bayId, fromMs }) => `(bay_id = ${bayId} AND at_ms >= ${fromMs})`).join(' OR ')})`;

/** What was written or voided after the batch of stamp `stampMs`, oldest first. */
export async function recordedAfter(
	sql: Sql,
	bays: readonly BaySpan[],
	stampMs: number
): Promise<HistoryRow[]> {
	if (bays.length === 0) return [];
	return await select(
		sql,
		`SELECT ${COLUMNS} FROM history WHERE ${spans(bays)} AND (recorded_at_ms > ? OR void_recorded_at_ms > ?) ORDER BY id`,
		[stampMs, stampMs]
	);
}

/** Takes history back to what it was after the batch of stamp `stampMs`. */
export async function takeBack(sql: Sql, bays: readonly BaySpan[], stampMs: number): Promise<void> {
	if (bays.length === 0) return;
	await run(sql, `DELETE FROM history WHERE ${spans(bays)} AND recorded_at_ms > ?`, [stampMs]);
	await run(
		sql,
		`UPDATE history SET voided_at_ms = NULL, void_recorded_at_ms = NULL WHERE ${spans(bays)} AND void_recorded_at_ms > ?`,
		[stampMs]
	);
}

/** Rows by id. */
export async function byIds(sql: Sql, ids: readonly number[]): Promise<HistoryRow[]> {
	if (ids.length === 0) return [];
	return await select(sql, `SELECT ${COLUMNS} FROM history WHERE id IN (?)`, [ids]);
}

export async function setEvent(sql: Sql, id: number, eventId: number): Promise<void> {
	await run(sql, 'UPDATE history SET event_id = ? WHERE id = ?', [eventId, id]);
}

/** Effective entries of bays with at_ms in [fromMs, toMs), by bay and time. */
export async function effective(
	sql: Sql,
	bayIds: readonly number[],
	fromMs: number,
	toMs: number
): Promise<HistoryRow[]> {
	if (bayIds.length === 0) return [];
	return await select(
		sql,
		`SELECT ${COLUMNS} FROM history WHERE bay_id IN (?) AND at_ms >= ? AND at_ms < ? AND voided_at_ms IS NULL ORDER BY bay_id, at_ms, id`,
		[bayIds, fromMs, toMs]
	);
}
