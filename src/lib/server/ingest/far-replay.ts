import type { Sql } from '$lib/server/store/queries/bulk';
import * as acts from '$lib/server/store/queries/acts';
import * as driftState from '$lib/server/store/queries/drift-state';
import * as nodeState from '$lib/server/store/queries/node-state';
import * as readings from '$lib/server/store/queries/readings';
import { hostsOf } from './batch';
import { inService, type NodeEntry } from './node-entry';
import type { Pipeline } from './pipeline';
import { beginFar, continueTo, DENSE_MS, nextWindowEnd, type Replay } from './replay';
import { adopt } from './steps/detect';
import { storeResults } from './steps/store';
import { Work } from './work';

/** What is newer than this is replayed under the pipeline's own lock, so that nothing comes in between. */
const TAIL_MS = 120_000;

/** Replays one group with marked hours; false when none is marked. */
export async function replayMarked(pipeline: Pipeline): Promise<boolean> {
	const { room } = pipeline;
	const marks = await nodeState.markedHours(room.pool);
	const first = marks[0];
	if (first === undefined) return false;
	const ids = room.registry.groupOf(first.nodeId) ?? [first.nodeId];
	const entries = room.groups.entriesOf(ids).filter(inService);
	const beganMs = room.stamps.next();
	if (entries.length !== ids.length || entries.length === 0) {
		// Withdrawn or moved since: its rows move nothing any more.
		await nodeState.clearMarks(room.pool, [first.nodeId], beganMs);
		return true;
	}
	const markedMs = Math.min(
		...marks.filter(({ nodeId }) => ids.includes(nodeId)).map(({ hourMs }) => hourMs)
	);
	const replay = await beginFar(room.pool, room.groups, entries, markedMs);
	if (replay.fromStampMs === 0 && !(await reachesBack(room.pool, entries, Date.now()))) {
		// What is left would tell another history than the one that was true: the rows stay, states do not move.
		room.log.warn({ nodes: ids.length }, 'late rows move no state: readings do not reach back');
		await nodeState.clearMarks(room.pool, ids, beganMs);
		return true;
	}
	const denseFromMs = Date.now() - DENSE_MS;
	for (
		let endMs = nextWindowEnd(replay);
		endMs < Date.now() - TAIL_MS;
		endMs = nextWindowEnd(replay)
	)
		await continueTo(room.pool, replay, endMs, denseFromMs, room.stamps);
	await pipeline.exclusive(async () => await finish(pipeline, replay, { ids, markedMs, beganMs }));
	return true;
}

/** History may have changed from the marked hour on: drift closes those hours anew. */
async function markDrift(
	sql: Sql,
	{ room }: Pipeline,
	work: Work,
	ids: readonly number[],
	markedMs: number
): Promise<void> {
	const marks = room.frontier.marksOf(work, room.registry);
	for (const { siteId } of room.groups.entriesOf(ids).map(({ config }) => config)) {
		const hourMs = room.frontier.hourTouched(siteId, markedMs);
		if (hourMs !== null) marks.push({ siteId, hourMs });
	}
	await driftState.mark(sql, marks, work.stampMs);
}

/** Whether all that a replay from the beginning needs is still in store: each node's placing and every row since. */
async function reachesBack(
	sql: Sql,
	entries: readonly NodeEntry[],
	nowMs: number
): Promise<boolean> {
	const placed = await acts.placings(
		sql,
		entries.map(({ id }) => id)
	);
	const kept = await readings.keptFromMs(
		sql,
		entries.map(({ config }) => config.siteId),
		nowMs
	);
	return entries.every(({ id, config: { placedAtMs } }) => {
		const inStore = placed.some((act) => act.nodeId === id && act.atMs === placedAtMs);
		return inStore && placedAtMs !== null && placedAtMs >= kept;
	});
}

/** The last rows, and the swap: between two batches, in one transaction. */
async function finish(
	pipeline: Pipeline,
	replay: Replay,
	{ ids, markedMs, beganMs }: { ids: readonly number[]; markedMs: number; beganMs: number }
): Promise<void> {
	const { room } = pipeline;
	const now = room.registry.groupOf(ids[0] as number) ?? [];
	// The group changed meanwhile: its marks stand, the next run takes the new one.
	if (now.length !== ids.length || !now.every((id, i) => id === ids[i])) return;
	const work = new Work(room.stamps.next(), Date.now());
	try {
		await room.transactions.run(async (sql) => {
			await continueTo(sql, replay, Number.MAX_SAFE_INTEGER, Date.now() - DENSE_MS, room.stamps);
			await adopt(sql, room, work, replay);
			work.groups.add(replay.group);
			replay.group.noteProgress();
			for (const slow of replay.group.allSlow()) work.slow.push(slow);
			work.snapshots.push(...replay.group.snapshot(room.stamps.next(), false));
			await nodeState.clearMarks(sql, ids, beganMs);
			await markDrift(sql, pipeline, work, ids, markedMs);
			await storeResults(sql, work, hostsOf(room));
		});
	} catch (error) {
		room.groups.forget(ids);
		// Rows that waited in the group are to be read again, also while the database does not answer.
		pipeline.wake(ids);
		await room.registry.loadLives(room.pool, [...ids]);
		throw error;
	}
}
