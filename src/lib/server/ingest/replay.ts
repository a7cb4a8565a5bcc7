import * as detection from '$lib/detection/group';
import type { Outcome } from '$lib/detection/types';
import type { Sql } from '$lib/server/store/queries/bulk';
import * as nodeState from '$lib/server/store/queries/node-state';
import type { Groups } from './groups';
import { membersOf } from './groups';
import { restoreState, type HostedGroup, type Queued } from './hosted-group';
import type { NodeEntry } from './node-entry';
import { storedItems } from './stored-stream';

/** A row up to this late goes in by snapshot and replay at once (method, 'History and feed'). */
export const NEAR_MS = 900_000;
/** Snapshots are at most 5 min apart; a little less, since they are taken when a batch ends. */
export const SNAPSHOT_EVERY_MS = 240_000;
/** Dense snapshots are kept for this long. */
export const DENSE_MS = 1_200_000;
/** One snapshot a UTC day is kept for as long as rows may move states, and a day. */
export const DAILY_MS = 15 * 86_400_000;
const DAY_MS = 86_400_000;
/** One window of stored rows read at once by a long replay. */
const WINDOW_MS = 6 * 3_600_000;

export const dayOfMs = (atMs: number): number => Math.floor(atMs / DAY_MS);

/** An outcome with the stamp under which history records it. */
export interface Stamped {
	outcome: Outcome;
	stampMs: number;
}

export interface Replay {
	group: HostedGroup;
	/** Stamp of the snapshot it began from; 0 = from the beginning. */
	fromStampMs: number;
	outcomes: Stamped[];
	snapshots: nodeState.SnapshotRow[];
	/** Event time up to which rows are in. */
	toMs: number;
	/** Acts up to this event time are in. */
	actsToMs: number;
}

/** The newest snapshot before which nothing of `late` was already passed, as a group to advance. */
export async function beginNear(
	sql: Sql,
	groups: Groups,
	group: HostedGroup,
	late: readonly Queued[]
): Promise<Replay | null> {
	for (const { atMs } of await nodeState.snapshotTimes(sql, group.ids)) {
		if (atMs < group.newestAtMs - DENSE_MS) return null;
		const replay = await fromSnapshot(sql, groups, group.entries, atMs);
		if (replay !== null && late.every((queued) => goesIn(replay.group, queued))) return replay;
	}
	return null;
}

const goesIn = (group: HostedGroup, queued: Queued): boolean =>
	!detection.isLate(group.state, queued.item) && !group.isBehindOwn(queued);

/** For marked hours: the newest snapshot before them, else the beginning. */
export async function beginFar(
	sql: Sql,
	groups: Groups,
	entries: readonly NodeEntry[],
	markedMs: number
): Promise<Replay> {
	const times = await nodeState.snapshotTimes(
		sql,
		entries.map(({ id }) => id)
	);
	for (const { atMs } of times) {
		if (atMs >= markedMs) continue;
		const replay = await fromSnapshot(sql, groups, entries, atMs);
		if (replay !== null) return replay;
	}
	const state = detection.newGroup(membersOf(entries));
	const group = groups.host(entries, state, new Map());
	return { group, fromStampMs: 0, outcomes: [], snapshots: [], toMs: 0, actsToMs: 0 };
}

async function fromSnapshot(
	sql: Sql,
	groups: Groups,
	entries: readonly NodeEntry[],
	atMs: number
): Promise<Replay | null> {
	const rows = await nodeState.snapshot(
		sql,
		entries.map(({ id }) => id),
		atMs
	);
	const stored = rows.map(({ nodeId, fast, slow }) => ({
		nodeId,
		fast: Buffer.from(fast),
		slow: slow === null ? null : Buffer.from(slow)
	}));
	const state = stateOrNull(entries, stored);
	if (state === null) return null;
	const pointers = new Map(rows.map(({ nodeId, pointer }) => [nodeId, pointer]));
	const group = groups.host(entries, state, pointers);
	group.newestAtMs = atMs;
	group.lastSnapshotAtMs = atMs;
	const fromStampMs = Math.min(...rows.map(({ takenAtMs }) => takenAtMs));
	return { group, fromStampMs, outcomes: [], snapshots: [], toMs: atMs, actsToMs: atMs };
}

/** A snapshot in a layout of another version is none. */
function stateOrNull(
	entries: readonly NodeEntry[],
	stored: Parameters<typeof restoreState>[1]
): detection.Group | null {
	try {
		return restoreState(membersOf(entries), stored);
	} catch (error) {
		if (error instanceof RangeError) return null;
		throw error;
	}
}

export interface Stamps {
	/** A stamp above all given out before. */
	next(): number;
	/** What is given out from now on lies above. */
	atLeast(ms: number): void;
}

/** Puts all stored rows before `toMs` in that are not in yet; dense snapshots only from `denseFromMs` on. */
export async function continueTo(
	sql: Sql,
	replay: Replay,
	toMs: number,
	denseFromMs: number,
	stamps: Stamps
): Promise<void> {
	const { group } = replay;
	const starts = group.entries.map((entry) => ({
		entry,
		after: group.pointers.get(entry.id) ?? null,
		fromMs: 0
	}));
	const items = await storedItems(sql, starts, replay.actsToMs, toMs);
	advance(replay, items, denseFromMs, stamps);
	replay.toMs = Math.max(replay.toMs, toMs);
	replay.actsToMs = Math.max(replay.actsToMs, toMs - 1);
}

/** The next window's end of a long replay, so that other work comes in between. */
export function nextWindowEnd(replay: Replay): number {
	const oldestMs = Math.min(
		...replay.group.entries.map(({ config }) => config.placedAtMs ?? Number.MAX_SAFE_INTEGER)
	);
	return Math.max(replay.toMs, oldestMs) + WINDOW_MS;
}

function advance(
	replay: Replay,
	items: readonly Queued[],
	denseFromMs: number,
	stamps: Stamps
): void {
	const { group } = replay;
	let stampMs = stamps.next();
	const outcomes: Outcome[] = [];
	for (const queued of items) {
		const daily = dayOfMs(group.newestAtMs) !== dayOfMs(queued.mergeAtMs);
		const dense = queued.mergeAtMs >= denseFromMs && mustSnapshot(group, queued.mergeAtMs);
		if (group.newestAtMs > 0 && (daily || dense)) {
			replay.snapshots.push(...group.snapshot(stampMs, daily));
			stampMs = stamps.next();
		}
		outcomes.length = 0;
		group.take(queued, outcomes);
		for (const outcome of outcomes) replay.outcomes.push({ outcome, stampMs });
	}
}

/** Whether a snapshot belongs before an item of this time. */
export const mustSnapshot = (group: HostedGroup, nextAtMs: number): boolean =>
	nextAtMs - group.lastSnapshotAtMs >= SNAPSHOT_EVERY_MS ||
	dayOfMs(nextAtMs) !== dayOfMs(group.newestAtMs);
