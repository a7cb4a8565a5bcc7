import type { LearnedReference } from '$lib/detection/types';
import { run, select, type Sql } from './bulk';

/** Keeps a learned reference; the same one learned again by a replay stays one row. */
export async function keepLearned(
	sql: Sql,
	nodeId: number,
	bayId: number,
	learned: LearnedReference
): Promise<void> {
	const there = await select<{ id: number }>(
		sql,
		'SELECT id FROM reference WHERE node_id = ? AND learned_at_ms = ? AND bay_id = ?',
		[nodeId, learned.learnedAtMs, bayId]
	);
	if (there.length > 0) return;
	await run(
		sql,
		`INSERT INTO reference (node_id, bay_id, learned_at_ms, x_mg, y_mg, z_mg, sigma_mg, temp_c, offset_x_mg, offset_y_mg, offset_z_mg, readings) VALUES (?)`,
		[
			[
				nodeId,
				bayId,
				learned.learnedAtMs,
				...learned.fieldMg,
				learned.sigmaMg,
				learned.tempC,
				...(learned.offsetMg ?? [null, null, null]),
				learned.readings
			]
		]
	);
}

/** The newest learned reference not yet superseded is accepted; those before it are superseded. */
export async function accept(
	sql: Sql,
	accepted: { nodeId: number; atMs: number; provisional: boolean; by: string }
): Promise<void> {
	const rows = await select<{ id: number }>(
		sql,
		'SELECT id FROM reference WHERE node_id = ? AND learned_at_ms <= ? AND superseded_at_ms IS NULL ORDER BY learned_at_ms DESC, id DESC LIMIT 1',
		[accepted.nodeId, accepted.atMs]
	);
	const id = rows[0]?.id;
	if (id === undefined) return;
	await run(
		sql,
		'UPDATE reference SET accepted_at_ms = ?, accepted_by = ?, provisional = ? WHERE id = ?',
		[accepted.atMs, accepted.by.slice(0, 120), accepted.provisional, id]
	);
	await run(
		sql,
		'UPDATE reference SET superseded_at_ms = ? WHERE node_id = ? AND id <> ? AND superseded_at_ms IS NULL AND learned_at_ms <= ?',
		[accepted.atMs, accepted.nodeId, id, accepted.atMs]
	);
}
