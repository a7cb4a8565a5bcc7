import { hostsOf } from '$lib/server/ingest/batch';
import { inService, type DriftHeld, type NodeEntry } from '$lib/server/ingest/node-entry';
import type { Pipeline } from '$lib/server/ingest/pipeline';
import { storeResults } from '$lib/server/ingest/steps/store';
import { Work } from '$lib/server/ingest/work';
import * as state from '$lib/server/store/queries/drift-state';

const NONE: DriftHeld = { driftingSinceMs: null, refreshSinceMs: null };

/**
 * Shows what drift holds, or no longer holds, on the bays of some sites. Only the pipeline writes node state: this
 * runs between two of its batches, by the same door as silence. Returns how many nodes changed.
 */
export async function tellConditions(
	pipeline: Pipeline,
	siteIds: readonly number[],
	nowMs: number
): Promise<number> {
	const rows = await state.flags(pipeline.room.pool, { siteIds });
	const flags = new Map(rows.map((row) => [row.nodeId, row]));
	const sites = new Set(siteIds);
	const changed: { entry: NodeEntry; held: DriftHeld }[] = [];
	for (const entry of pipeline.room.registry.all()) {
		if (!sites.has(entry.config.siteId) || !inService(entry)) continue;
		const flag = flags.get(entry.id);
		const held =
			flag === undefined || flag.placedAtMs !== entry.config.placedAtMs
				? NONE
				: { driftingSinceMs: flag.driftingSinceMs, refreshSinceMs: flag.refreshSinceMs };
		if (differs(pipeline, entry, held)) changed.push({ entry, held });
		else entry.live.drift = held;
	}
	if (changed.length === 0) return 0;
	await pipeline.exclusive(async () => await show(pipeline, changed, nowMs));
	return changed.length;
}

/** Compared with what is shown too: a stop may have come between the closing of an hour and its telling. */
function differs(pipeline: Pipeline, entry: NodeEntry, held: DriftHeld): boolean {
	const { shown, drift } = entry.live;
	const [drifting, due] = [held.driftingSinceMs !== null, held.refreshSinceMs !== null];
	if (drifting !== (drift.driftingSinceMs !== null)) return true;
	if (due !== (drift.refreshSinceMs !== null)) return true;
	if (shown === null) return false;
	const names = new Set([shown.condition, ...shown.also.split(',')]);
	if (names.has('drifting') !== drifting) return true;
	if (due) return !names.has('refresh_due');
	const view = pipeline.viewOf(entry.id);
	return names.has('refresh_due') && view !== null && !view.conditions.includes('refresh_due');
}

async function show(
	{ room }: Pipeline,
	changed: readonly { entry: NodeEntry; held: DriftHeld }[],
	nowMs: number
): Promise<void> {
	const ids = changed.map(({ entry }) => entry.id);
	const work = new Work(room.stamps.next(), nowMs);
	await room.groups.load(room.pool, ids, nowMs);
	try {
		for (const { entry, held } of changed) {
			entry.live.drift = held;
			work.touched.add(entry);
		}
		await room.transactions.run(async (sql) => {
			await storeResults(sql, work, hostsOf(room));
		});
	} catch (error) {
		// What is stored is what is known: the next look compares anew.
		await room.registry.loadLives(room.pool, ids);
		throw error;
	}
}
