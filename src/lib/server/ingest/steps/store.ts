import type { Sql } from '$lib/server/store/queries/bulk';
import * as acts from '$lib/server/store/queries/acts';
import * as commands from '$lib/server/store/queries/commands';
import * as history from '$lib/server/store/queries/history';
import * as ingest from '$lib/server/store/queries/ingest';
import * as nodeState from '$lib/server/store/queries/node-state';
import * as pulses from '$lib/server/store/queries/pulses';
import * as readings from '$lib/server/store/queries/readings';
import * as received from '$lib/server/store/queries/received';
import * as references from '$lib/server/store/queries/references';
import * as rejected from '$lib/server/store/queries/rejected';
import * as rollups from '$lib/server/store/queries/rollups';
import type { NodeEntry } from '../node-entry';
import { firstDiffering } from '../order';
import { changeBetween } from '../shown';
import type { Transaction } from '../transaction';
import type { Work } from '../work';
import { allotAndWrite, type SiteNews } from './feed';

/** Overlapping inserts in another order deadlock: every list is written by rising key. */
const byNodeAnd =
	<T extends { nodeId: number }>(second: (row: T) => number) =>
	(a: T, b: T): number =>
		firstDiffering(a.nodeId - b.nodeId, second(a) - second(b));

/** What came, before detection has a say: readings, marks of receipt, rollups, pulses, rejections. */
export async function storeArrivals(sql: Sql, work: Work): Promise<void> {
	work.readings.sort((a, b) =>
		firstDiffering(
			a.nodeId - b.nodeId,
			a.atMs - b.atMs,
			a.boot - b.boot,
			firstDiffering(a.seq - b.seq, a.row - b.row)
		)
	);
	work.blocks.sort((a, b) =>
		firstDiffering(a.nodeId - b.nodeId, a.boot - b.boot, a.block - b.block)
	);
	await readings.insert(sql, work.readings);
	await received.mark(sql, work.blocks);
	await rollups.addHours(sql, [...work.hours.values()].sort(byNodeAnd((h) => h.hourMs)));
	await rollups.addCounts(sql, [...work.counts.values()].sort(byNodeAnd((c) => c.dayMs)));
	await pulses.insert(sql, work.pulses);
	for (const hello of work.hellos) await ingest.writeBoot(sql, hello);
	await rejected.insert(sql, work.rejected);
	for (const facts of work.facts.values()) await ingest.writeFacts(sql, facts);
	for (const { commandId, nodeId, outcome, reason } of work.answers)
		await commands.answer(sql, commandId, nodeId, { atMs: work.nowMs, outcome, reason });
}

export interface Hosts {
	/** Detection's view of a node; null while it has none. */
	viewOf(entry: NodeEntry): ingest.ShownRow | null;
	/** Detection's fast state of a node; empty = leave the stored one. */
	fastOf(entry: NodeEntry): Uint8Array;
}

/** What detection made of it: history, feed, what bays show, states. Returns nothing to undo: the caller commits. */
export async function storeResults(
	transaction: Transaction,
	work: Work,
	hosts: Hosts
): Promise<void> {
	const sql = transaction.later;
	await storeJudgements(transaction, work);
	await storeStates(sql, work, hosts);
	const news = newsOf(work, hosts);
	await allotAndWrite(transaction, news, work.nowMs);
	for (const { historyId, eventId } of work.relinked)
		await history.setEvent(sql, historyId, eventId);
	for (const one of work.voided)
		await history.voidEntry(sql, one.historyId, one.decidedAtMs, one.stampMs);
	await history.insert(
		sql,
		work.drafts.map(({ row }) => row)
	);
}

async function storeJudgements(transaction: Transaction, work: Work): Promise<void> {
	const sql = transaction.later;
	for (const [actId, outcome] of [...work.actsDone].sort(([a], [b]) => a - b))
		await acts.settleOutcome(sql, actId, work.stampMs, outcome);
	for (const { nodeId, reference } of work.learned) {
		const bayId = bayOf(work, nodeId);
		if (bayId !== null) await references.keepLearned(transaction, nodeId, bayId, reference);
	}
	for (const accepted of work.accepted) await references.accept(transaction, accepted);
	for (const verdict of work.judged) await pulses.judge(sql, verdict);
	await nodeState.markHours(
		sql,
		[...work.marks.values()].sort(byNodeAnd((m) => m.hourMs)),
		work.stampMs
	);
	for (const command of work.commands) await orderCommand(sql, work, command);
}

/** One open habit a node: a newer wish takes the older one's place. */
async function orderCommand(sql: Sql, work: Work, command: commands.NewCommand): Promise<void> {
	if (command.verb === 'report')
		await commands.giveUp(
			sql,
			{ nodeId: command.nodeId, verb: 'report', otherThanBoot: null },
			work.nowMs,
			'superseded'
		);
	await commands.order(sql, command);
}

function bayOf(work: Work, nodeId: number): number | null {
	for (const group of work.groups) {
		const entry = group.entries.find(({ id }) => id === nodeId);
		if (entry !== undefined) return entry.config.bayId;
	}
	return null;
}

async function storeStates(sql: Sql, work: Work, hosts: Hosts): Promise<void> {
	const touched = [...work.touched].sort((a, b) => a.id - b.id);
	await nodeState.writeFast(
		sql,
		touched.map((entry) => fastRow(entry, hosts.fastOf(entry)))
	);
	await nodeState.writeSlow(
		sql,
		work.slow.sort((a, b) => a.nodeId - b.nodeId)
	);
	await nodeState.writeSnapshots(sql, work.snapshots.sort(byNodeAnd((s) => s.atMs)));
	await nodeState.thinSnapshots(sql, work.keeps);
	const clocks = touched.filter(({ live }) => live.skew.changed);
	await nodeState.writeClocks(
		sql,
		clocks.map(({ id, live }) => ({ nodeId: id, skews: live.skew.encode() }))
	);
	for (const { live } of clocks) live.skew.changed = false;
}

const fastRow = ({ id, live }: NodeEntry, state: Uint8Array): nodeState.FastRow => ({
	nodeId: id,
	heardAtMs: live.heardAtMs ?? 0,
	heardBoot: live.heardBoot,
	pointer: live.pointer,
	waitingFromMs: live.waitingFromMs,
	last: live.last,
	tempDc: live.tempDc,
	batteryMv: live.batteryMv,
	rssiDbm: live.rssiDbm,
	marks: live.marks,
	state
});

/** Events, then what the bays show, by site. */
function newsOf(work: Work, hosts: Hosts): Map<number, SiteNews> {
	const states = new Map(
		[...work.touched].flatMap(({ live }) =>
			live.shown === null ? [] : [[live.shown.bayId, live.shown.state] as const]
		)
	);
	const news = new Map<number, SiteNews>();
	const of = (siteId: number): SiteNews => {
		let site = news.get(siteId);
		if (site === undefined) news.set(siteId, (site = { events: [], shown: [], other: [], states }));
		return site;
	};
	for (const { siteId, event, told } of work.loose)
		of(siteId).events.push({ event, told: told ?? (() => undefined) });
	for (const { siteId, row, event } of work.drafts)
		if (event !== null)
			of(siteId).events.push({ event, told: (eventId) => (row.eventId = eventId) });
	for (const { siteId, bayId, nodeId } of work.closures)
		of(siteId).other.push({ kind: 'closure', bayId, nodeId });
	for (const entry of work.touched) {
		const now = hosts.viewOf(entry);
		if (now === null) continue;
		const change = changeBetween(entry.live.shown, now);
		if (change !== null) of(now.siteId).shown.push({ entry, now, change });
	}
	return news;
}
