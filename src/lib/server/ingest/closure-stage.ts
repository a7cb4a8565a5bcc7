import { actArgs } from '$lib/schemas/act';
import type { ActRow } from '$lib/server/store/queries/acts';
import { run, type Sql } from '$lib/server/store/queries/bulk';

/** A closure begins or is lifted. Stages: 0 ahead, 1 begun, 2 over. */
export async function closureStage(sql: Sql, act: ActRow): Promise<void> {
	const json = JSON.parse(act.args) as unknown;
	if (act.kind === 'close') {
		const { closureId } = actArgs.close.parse(json);
		await run(sql, 'UPDATE closure SET stage = 1 WHERE id = ? AND stage = 0', [closureId]);
	} else if (act.kind === 'lift') {
		const { closureId } = actArgs.lift.parse(json);
		await run(
			sql,
			'UPDATE closure SET stage = 2, lifted_at_ms = COALESCE(lifted_at_ms, ?) WHERE id = ?',
			[act.atMs, closureId]
		);
	}
}
