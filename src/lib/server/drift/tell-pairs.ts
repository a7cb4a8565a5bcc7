import { unpackMemory } from '$lib/drift/codec';
import { applyPair } from '$lib/drift/node-drift';
import type { Pipeline } from '$lib/server/ingest/pipeline';
import * as inputs from '$lib/server/store/queries/drift-inputs';
import * as pairs from '$lib/server/store/queries/drift-pairs';
import * as state from '$lib/server/store/queries/drift-state';
import { settingsAt } from './site-nodes';
import { pairRecord, pairRow } from './take-hour';

/**
 * Tells accepted pairs within seconds, with what drift knew at the last closed hour; the hour's own closing tells
 * them again, settled. Nobody waits an hour to see what a film refresh has healed.
 */
export async function tellPairs({ room }: Pipeline, nowMs: number): Promise<number> {
	const keys = room.frontier.takeJudged();
	if (keys.length === 0) return 0;
	const found = await inputs.pulsesByKey(room.pool, keys);
	const stored = await state.memories(
		room.pool,
		found.map(({ nodeId }) => nodeId)
	);
	const memories = new Map(stored.map((row) => [row.nodeId, row]));
	const rows: pairs.PairRow[] = [];
	for (const pulse of found) {
		const entry = room.registry.byId(pulse.nodeId);
		const row = entry === undefined ? undefined : memories.get(pulse.nodeId);
		if (entry === undefined || row === undefined) continue;
		const view = room.groups.of(entry.id)?.view(entry.id);
		const pair = pairRecord({ ...pulse, vacant: view?.state === 'vacant' }, entry.config.profile);
		const memory = unpackMemory(row.memory);
		if (pair === null || pulse.atMs < memory.drift.reference.atMs) continue;
		const settings = (await settingsAt(room.pool, row.siteId, nowMs)).of(entry.id);
		rows.push(pairRow(pulse, pair, applyPair(memory.drift, pair, settings).diagnosis, false));
	}
	await pairs.writeNew(room.pool, rows);
	return rows.length;
}
