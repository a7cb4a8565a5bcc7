import type { Outcome } from '$lib/detection/types';
import type { Sql } from '$lib/server/store/queries/bulk';
import * as nodeState from '$lib/server/store/queries/node-state';
import type { Groups } from '../groups';
import type { HostedGroup, Pumped } from '../hosted-group';
import type { Registry } from '../registry';
import {
	beginNear,
	continueTo,
	dayOfMs,
	DAILY_MS,
	DENSE_MS,
	mustSnapshot,
	NEAR_MS,
	type Replay,
	type Stamps
} from '../replay';
import { voiding } from '../telling';
import type { Work } from '../work';
import { tell, tellReplay } from './tell';

export interface DetectRoom {
	registry: Registry;
	groups: Groups;
	stamps: Stamps;
	/** Detection threw: the group is set aside, its rows stay stored and wait. */
	setAside(group: HostedGroup, error: unknown): void;
}

/** Advances groups in memory while the database still stores what came. */
export function pumpAll(
	room: DetectRoom,
	groups: Iterable<HostedGroup>,
	nowMs: number
): Map<HostedGroup, Pumped> {
	const pumped = new Map<HostedGroup, Pumped>();
	for (const group of groups) {
		try {
			pumped.set(group, group.pump(nowMs));
		} catch (error) {
			room.setAside(group, error);
		}
	}
	return pumped;
}

/** Tells what each group brought forth; replays those into which something came late. */
export async function settleAll(
	sql: Sql,
	room: DetectRoom,
	work: Work,
	pumped: ReadonlyMap<HostedGroup, Pumped>
): Promise<void> {
	for (const [group, result] of pumped) {
		const replay = await replayOrAside(sql, room, work, group, result);
		if (replay === 'aside') continue;
		if (replay === null) await tell(sql, room.registry, work, result.outcomes);
		const now = replay?.group ?? group;
		touch(room, work, now, result);
		settleSilence(work, now, replay === null ? result.taken : new Set(now.ids));
		now.noteProgress();
		keepSnapshot(room, work, now, replay);
	}
}

/** An error of detection, not of the database, sets the group aside; its late rows mark their hours. */
async function replayOrAside(
	sql: Sql,
	room: DetectRoom,
	work: Work,
	group: HostedGroup,
	result: Pumped
): Promise<Replay | null | 'aside'> {
	try {
		return await replayIfLate(sql, room, work, group, result);
	} catch (error) {
		if (typeof (error as { code?: unknown }).code === 'string') throw error;
		for (const { item } of result.late) work.mark(item.nodeId, item.atMs);
		room.setAside(group, error);
		return 'aside';
	}
}

/** Near rows are replayed at once; older ones mark their hours, and go in now where their node has not passed them. */
async function replayIfLate(
	sql: Sql,
	room: DetectRoom,
	work: Work,
	group: HostedGroup,
	result: Pumped
): Promise<Replay | null> {
	if (result.late.length === 0) return null;
	const near = result.late.filter(({ item }) => item.atMs >= group.newestAtMs - NEAR_MS);
	const replay = near.length === 0 ? null : await beginNear(sql, room.groups, group, near);
	for (const queued of result.late) {
		if (replay !== null && near.includes(queued)) continue;
		work.mark(queued.item.nodeId, queued.item.atMs);
		if (group.isBehindOwn(queued) || replay !== null) continue;
		group.take(queued, result.outcomes);
		result.taken.add(queued.item.nodeId);
	}
	if (replay === null) return null;
	await continueTo(sql, replay, Number.MAX_SAFE_INTEGER, 0, room.stamps);
	for (const id of replay.group.ids) replay.group.fast(id);
	result.slow = replay.group.allSlow();
	await adopt(sql, room, work, replay);
	return replay;
}

/** A finished replay takes the place of what was: in history, feed, snapshots and memory. */
export async function adopt(sql: Sql, room: DetectRoom, work: Work, replay: Replay): Promise<void> {
	await tellReplay(sql, room.registry, work, replay);
	await nodeState.dropSnapshotsTakenAfter(sql, replay.group.ids, replay.fromStampMs);
	const denseFromMs = replay.group.newestAtMs - DENSE_MS;
	const kept = replay.snapshots.filter(({ atMs, daily }) => daily || atMs >= denseFromMs);
	work.snapshots.push(...kept);
	room.groups.replace(replay.group);
	work.replayed.add(replay.group);
	for (const entry of replay.group.entries) work.touched.add(entry);
}

/** Whose stored state or shown row may differ now: nodes of rows and outcomes, and those beside them. */
function touch(room: DetectRoom, work: Work, group: HostedGroup, result: Pumped): void {
	work.groups.add(group);
	const touched = new Set(result.taken);
	for (const outcome of result.outcomes) {
		const nodeId = nodeOf(outcome);
		if (nodeId === null) continue;
		touched.add(nodeId);
		for (const near of room.registry.neighboursOf(nodeId)) touched.add(near);
	}
	for (const slow of result.slow) {
		work.slow.push(slow);
		touched.add(slow.nodeId);
	}
	for (const id of touched) {
		const entry = room.registry.byId(id);
		if (entry !== undefined) work.touched.add(entry);
	}
}

const nodeOf = (outcome: Outcome): number | null =>
	'nodeId' in outcome ? outcome.nodeId : outcome.kind === 'enter' ? outcome.entry.nodeId : null;

/** Rows came and none of them left a gap: what the silence told did not happen. */
function settleSilence(work: Work, group: HostedGroup, taken: ReadonlySet<number>): void {
	for (const entry of group.entries) {
		const told = entry.live.silence.unknown;
		const { bayId, siteId } = entry.config;
		if (told === null || bayId === null || !taken.has(entry.id)) continue;
		entry.live.silence.unknown = null;
		const row = { bayId, state: 'unknown', atMs: told.atMs, uncertaintyS: 0 } as const;
		work.loose.push({
			siteId,
			event: voiding(entry.id, row, told.eventId, true, 'the node had kept its readings')
		});
	}
}

function keepSnapshot(
	room: DetectRoom,
	work: Work,
	group: HostedGroup,
	replay: Replay | null
): void {
	const due = replay !== null || mustSnapshot(group, group.newestAtMs) || isNewDay(group);
	if (!due || group.newestAtMs === 0) return;
	const daily = isNewDay(group);
	// A new stamp: what a replay of this batch recorded lies above the batch's own.
	work.snapshots.push(...group.snapshot(room.stamps.next(), daily));
	work.keeps.push({
		nodeIds: group.ids,
		denseFromMs: group.newestAtMs - DENSE_MS,
		dailyFromMs: group.newestAtMs - DAILY_MS
	});
}

const isNewDay = (group: HostedGroup): boolean =>
	dayOfMs(group.lastSnapshotAtMs) !== dayOfMs(group.newestAtMs);
