import type { Pool } from 'mysql2/promise';
import type { NodeView } from '$lib/detection/types';
import type { Log } from '$lib/server/log';
import * as acts from '$lib/server/store/queries/acts';
import * as commands from '$lib/server/store/queries/commands';
import * as driftState from '$lib/server/store/queries/drift-state';
import * as ingest from '$lib/server/store/queries/ingest';
import type { ShownRow } from '$lib/server/store/queries/ingest';
import * as received from '$lib/server/store/queries/received';
import * as rejected from '$lib/server/store/queries/rejected';
import { bareBay } from './bare-bay';
import { closureStage } from './closure-stage';
import type { DriftFrontier } from './drift-frontier';
import type { Groups } from './groups';
import type { HostedGroup } from './hosted-group';
import { inService, type NodeEntry } from './node-entry';
import type { Registry } from './registry';
import type { Stamps } from './replay';
import type { SeenBlocks } from './seen-blocks';
import { shownOf } from './shown';
import { actItem } from './stored-stream';
import { check, type FrameMessage } from './steps/check';
import { pumpAll, settleAll, type DetectRoom } from './steps/detect';
import { gather, noteDuplicate, type ItemsByNode } from './steps/gather';
import type { OpenedMessage } from './steps/open';
import { storeArrivals, storeResults, type Hosts } from './steps/store';
import { dayOf } from './tally';
import type { Transaction, Transactions } from './transaction';
import { Work } from './work';

/** Bytes of a rejected message that are kept. */
const HEAD_BYTES = 512;
const HOUR_MS = 3_600_000;

export interface Room extends DetectRoom {
	pool: Pool;
	registry: Registry;
	groups: Groups;
	seen: SeenBlocks;
	stamps: Stamps;
	log: Log;
	transactions: Transactions;
	frontier: DriftFrontier;
}

export interface Batch {
	opened: readonly OpenedMessage[];
	acts: readonly acts.ActRow[];
	/** Nodes whose groups must be in memory: rows of theirs wait in the database. */
	load: readonly number[];
}

/** What one run of a batch had in hand, so that its memory can be dropped after an error. */
export interface Touched {
	nodeIds: Set<number>;
}

/** Stores one batch in one transaction. Throws on any error, having rolled back. */
export async function runBatch(
	room: Room,
	batch: Batch,
	touched: Touched,
	nowMs: number
): Promise<Work> {
	const work = new Work(room.stamps.next(), nowMs);
	const items = await prepare(room, batch, work, touched);
	const busy = addItems(room, batch, items, touched);
	return await room.transactions.run(async (sql) => {
		for (const act of batch.acts)
			await acts.settleOutcome(sql.later, act.id, work.stampMs, takenWord(room, act));
		await storeArrivals(sql.later, work);
		const arrivals = sql.flush();
		arrivals.catch(() => undefined);
		const pumped = pumpAll(room, busy, nowMs);
		await arrivals;
		for (const group of pumped.keys()) for (const id of group.ids) touched.nodeIds.add(id);
		await settleAll(sql, room, work, pumped);
		const bare = await leaveBays(sql, room, batch.acts, work);
		const marks = room.frontier.marksOf(work, room.registry, batch.acts);
		await driftState.mark(sql.later, marks, work.stampMs);
		await storeResults(sql, work, hostsOf(room, bare));
		return work;
	});
}

async function prepare(
	room: Room,
	{ opened, acts: due, load }: Batch,
	work: Work,
	touched: Touched
): Promise<ItemsByNode> {
	const frames = opened.filter((one) => one.kind === 'frame');
	for (const { entry } of frames) touched.nodeIds.add(entry.id);
	await readBlocks(room, frames);
	const answered = await answeredCommands(room, frames);
	const moving = new Set(frames.map(({ entry }) => entry).filter(inService));
	const ids = [...moving].map(({ id }) => id);
	const ofActs = due.flatMap(({ nodeId }) => nodeId ?? []);
	await room.groups.load(room.pool, [...ids, ...ofActs, ...load], work.nowMs);
	const checked = check(frames, room.seen);
	work.blocks.push(...checked.blocks);
	for (const duplicate of checked.duplicates) noteDuplicate(duplicate, work);
	await gatherRejected(room, opened, work);
	return gather(checked.fresh, answered, work);
}

async function readBlocks(room: Room, frames: readonly FrameMessage[]): Promise<void> {
	const missing = room.seen.missing(
		frames.map(({ entry, frame }) => ({ nodeId: entry.id, boot: frame.boot, seq: frame.seq }))
	);
	if (missing.length > 0) room.seen.learn(missing, await received.find(room.pool, missing));
}

async function answeredCommands(
	room: Room,
	frames: readonly FrameMessage[]
): Promise<Map<string, commands.CommandRow>> {
	const ids = frames.flatMap(({ frame }) => (frame.kind === 'ack' ? [frame.commandId] : []));
	const rows = await commands.find(room.pool, ids);
	return new Map(rows.map((row) => [row.id.toString('hex'), row]));
}

/** At most 20 an hour and serial are kept; all are counted. */
async function gatherRejected(
	room: Room,
	opened: readonly OpenedMessage[],
	work: Work
): Promise<void> {
	const refused = opened.filter((one) => one.kind === 'rejected');
	if (refused.length === 0) return;
	const serials = [...new Set(refused.map(({ message }) => message.serial.slice(0, 32)))];
	const kept = await rejected.keptSince(room.pool, serials, work.nowMs - HOUR_MS);
	for (const { message, entry, reason, detail } of refused) {
		if (entry !== null) dayOf(work.counts, entry.id, message.arrivedAtMs).rejected += 1;
		const serial = message.serial.slice(0, 32);
		const n = kept.get(serial) ?? 0;
		if (n >= rejected.KEPT_PER_HOUR) continue;
		kept.set(serial, n + 1);
		work.rejected.push({
			atMs: message.arrivedAtMs,
			serial,
			nodeId: entry?.id ?? null,
			topic: message.topic,
			reason,
			detail,
			head: message.bytes.subarray(0, HEAD_BYTES),
			lengthBytes: message.bytes.length
		});
	}
}

/** Detection says in the same transaction what became of it, where there is a node for it. */
const takenWord = (room: Room, act: acts.ActRow): string =>
	act.nodeId !== null && room.groups.of(act.nodeId) !== undefined
		? 'done'
		: 'the node is not in service';

/** Hands items and acts to their groups; returns the groups to pump, those with waiting rows too. */
function addItems(
	room: Room,
	batch: Batch,
	items: ItemsByNode,
	touched: Touched
): Set<HostedGroup> {
	const busy = new Set<HostedGroup>();
	for (const [entry, queued] of items) {
		const group = room.groups.of(entry.id);
		if (group === undefined) {
			waitStored(entry, queued);
			continue;
		}
		// What a load brought from the database waits there already; this batch's rows are not stored yet.
		group.add(queued);
		busy.add(group);
	}
	for (const act of batch.acts) {
		const item = actItem(act);
		const group = item === null ? undefined : room.groups.of(item.nodeId);
		if (item === null || group === undefined) continue;
		group.add([{ item, order: null, mergeAtMs: item.atMs, arrivedAtMs: 0 }]);
		busy.add(group);
		touched.nodeIds.add(item.nodeId);
	}
	for (const group of room.groups.all()) if (group.waiting > 0) busy.add(group);
	return busy;
}

/** Detection of this node is set aside: its rows are stored and wait for it. */
function waitStored(entry: NodeEntry, queued: readonly { item: { atMs: number } }[]): void {
	for (const { item } of queued)
		entry.live.waitingFromMs = Math.min(entry.live.waitingFromMs ?? item.atMs, item.atMs);
}

/** Withdrawn nodes leave their bays; closures begin and end. */
async function leaveBays(
	sql: Transaction,
	room: Room,
	taken: readonly acts.ActRow[],
	work: Work
): Promise<Map<NodeEntry, ShownRow>> {
	const bare = new Map<NodeEntry, ShownRow>();
	for (const act of taken) {
		const entry = act.nodeId === null ? undefined : room.registry.byId(act.nodeId);
		const bayId = entry?.config.bayId ?? null;
		if (act.kind === 'close' || act.kind === 'lift') {
			await closureStage(sql, act);
			work.closures.push({ siteId: act.siteId, bayId: act.bayId, nodeId: act.nodeId });
		} else if (act.kind === 'withdraw' && entry !== undefined && bayId !== null) {
			await ingest.withdrawNode(sql, entry.id, act.atMs);
			const row = bareBay(entry, bayId, 'withdrawn', work.nowMs).shown[0]?.now;
			if (row !== undefined) bare.set(entry, row);
			work.touched.add(entry);
		}
	}
	return bare;
}

export const hostsOf = (room: Room, bare: ReadonlyMap<NodeEntry, ShownRow> = new Map()): Hosts => ({
	viewOf: (entry) => {
		const left = bare.get(entry);
		if (left !== undefined) return left;
		const view = viewOf(room, entry);
		const { bayId } = entry.config;
		if (view === null || bayId === null || !inService(entry)) return null;
		return shownOf(entry, bayId, view, (id) => room.registry.byId(id)?.config.bayCode ?? null);
	},
	fastOf: (entry) => room.groups.of(entry.id)?.fast(entry.id) ?? new Uint8Array()
});

export const viewOf = (room: Pick<Room, 'groups'>, entry: NodeEntry): NodeView | null =>
	room.groups.of(entry.id)?.view(entry.id) ?? null;
