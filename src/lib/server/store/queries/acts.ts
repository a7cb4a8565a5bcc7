import type { ActKind } from '$lib/schemas/act';
import { run, select, type Sql } from './bulk';

export interface ActRow {
	id: number;
	siteId: number;
	nodeId: number | null;
	bayId: number | null;
	kind: ActKind;
	atMs: number;
	/** JSON text. */
	args: string;
	byActor: string;
	recordedAtMs: number;
	takenAtMs: number | null;
}

const COLUMNS =
	'id, site_id AS siteId, node_id AS nodeId, bay_id AS bayId, kind, at_ms AS atMs, args, by_actor AS byActor, recorded_at_ms AS recordedAtMs, taken_at_ms AS takenAtMs';

/** Acts whose time has come and that no batch has taken, in the order of their making. */
export async function due(sql: Sql, nowMs: number, limit: number): Promise<ActRow[]> {
	return await select(
		sql,
		`SELECT ${COLUMNS} FROM act WHERE taken_at_ms IS NULL AND at_ms <= ? ORDER BY id LIMIT ?`,
		[nowMs, limit]
	);
}

/** When the next act's time comes; null = none waits. */
export async function nextDueMs(sql: Sql): Promise<number | null> {
	const rows = await select<{ atMs: number | null }>(
		sql,
		'SELECT MIN(at_ms) AS atMs FROM act WHERE taken_at_ms IS NULL'
	);
	return rows[0]?.atMs ?? null;
}

/** Taken acts of nodes that a replay puts in again: event time after `afterMs`. */
export async function takenAfter(
	sql: Sql,
	nodeIds: readonly number[],
	afterMs: number
): Promise<ActRow[]> {
	if (nodeIds.length === 0) return [];
	return await select(
		sql,
		`SELECT ${COLUMNS} FROM act WHERE node_id IN (?) AND at_ms > ? AND taken_at_ms IS NOT NULL ORDER BY at_ms, id`,
		[nodeIds, afterMs]
	);
}

/** Taken placings of some nodes, by node and event time. */
export async function placings(
	sql: Sql,
	nodeIds: readonly number[]
): Promise<{ nodeId: number; atMs: number }[]> {
	if (nodeIds.length === 0) return [];
	return await select(
		sql,
		"SELECT node_id AS nodeId, at_ms AS atMs FROM act WHERE kind = 'place' AND node_id IN (?) AND taken_at_ms IS NOT NULL",
		[nodeIds]
	);
}

export async function settleOutcome(
	sql: Sql,
	actId: number,
	takenAtMs: number,
	outcome: string
): Promise<void> {
	await run(sql, 'UPDATE act SET taken_at_ms = ?, outcome = ? WHERE id = ?', [
		takenAtMs,
		outcome.slice(0, 200),
		actId
	]);
}

/** Event times at which restarts of boot counters were accepted, rising, by node. */
export async function acceptedBoots(
	sql: Sql,
	nodeIds: readonly number[] | null
): Promise<{ nodeId: number; atMs: number }[]> {
	if (nodeIds !== null && nodeIds.length === 0) return [];
	return await select(
		sql,
		`SELECT node_id AS nodeId, at_ms AS atMs FROM act
		 WHERE kind = 'accept_boot' AND taken_at_ms IS NOT NULL AND node_id IS NOT NULL ${nodeIds === null ? '' : 'AND node_id IN (?)'}
		 ORDER BY at_ms`,
		nodeIds === null ? [] : [nodeIds]
	);
}
