import { actArgs } from '$lib/schemas/act';
import * as acts from '$lib/server/store/queries/acts';
import { run, type Sql } from '$lib/server/store/queries/bulk';
import type { NewChange } from '$lib/server/store/queries/changes';
import * as commands from '$lib/server/store/queries/commands';
import * as ingest from '$lib/server/store/queries/ingest';
import * as nodeState from '$lib/server/store/queries/node-state';
import * as received from '$lib/server/store/queries/received';
import type { Room } from './batch';
import { FAST_PERIOD_S } from './steps/aside';
import { isSetting } from './stored-stream';
import { allotAndWrite } from './steps/feed';
import type { Transaction } from './transaction';
import { bareBay } from './bare-bay';
import { closureStage } from './closure-stage';

type ActRow = acts.ActRow;

/** Acts that change which nodes there are or how they are counted: each is a transaction of its own. */
export const isStructural = (act: ActRow): boolean =>
	act.nodeId === null || isSetting(act) || ['place', 'accept_boot', 'ask'].includes(act.kind);

/** Runs some in one transaction; returns the nodes whose groups must be loaded with the next batch. */
export async function runStructural(
	room: Room,
	structural: readonly ActRow[],
	nowMs: number
): Promise<number[]> {
	const ids = [...new Set(structural.flatMap(({ nodeId }) => nodeId ?? []))];
	await room.registry.loadSome(room.pool, { ids }, nowMs);
	const moved: number[] = [];
	await room.transactions.run(async (sql) => {
		for (const act of structural) {
			const outcome = await runOne(room, sql, act, nowMs);
			await acts.settleOutcome(sql, act.id, room.stamps.next(), outcome);
			const moves = act.kind === 'place' || act.kind === 'accept_boot';
			if (act.nodeId !== null && moves && outcome === 'done') moved.push(act.nodeId);
		}
	});
	if (structural.some(isSetting)) await takeSettings(room, nowMs);
	if (moved.length > 0) await takeUp(room, moved, nowMs);
	const placed = new Set(structural.filter(({ kind }) => kind === 'place').map((a) => a.nodeId));
	return moved.filter((id) => placed.has(id));
}

/** What was written is read back: bays, groups, how far rows are taken. */
async function takeUp(room: Room, ids: readonly number[], nowMs: number): Promise<void> {
	await room.registry.loadSome(room.pool, { ids }, nowMs);
	for (const id of ids) {
		room.groups.forget([id]);
		room.seen.forget(id);
	}
	await room.registry.loadLives(room.pool, ids);
	room.groups.reconcile();
}

/** Settings are few and their nodes may be all of a site: the registrations are read again whole. */
async function takeSettings(room: Room, nowMs: number): Promise<void> {
	await room.registry.loadAll(room.pool, nowMs);
	room.groups.reconcile();
}

async function runOne(room: Room, sql: Transaction, act: ActRow, nowMs: number): Promise<string> {
	const { nodeId } = act;
	if (isSetting(act)) {
		await ingest.turnParameters(sql, actArgs.parameters.parse(JSON.parse(act.args)), nowMs);
		return 'done';
	}
	if (nodeId === null) return await withoutNode(sql, act, nowMs);
	const json = JSON.parse(act.args) as unknown;
	switch (act.kind) {
		case 'place':
			return await place(room, sql, { ...act, nodeId }, actArgs.place.parse(json), nowMs);
		case 'accept_boot':
			return await acceptBoot(sql, nodeId, actArgs.accept_boot.parse(json).boot);
		case 'ask':
			return await ask(room, sql, nodeId, act.byActor, nowMs);
		default:
			return 'not an act of this kind';
	}
}

/** A closure also holds for a bay without a node; anything else has nothing to act on. */
async function withoutNode(sql: Transaction, act: ActRow, nowMs: number): Promise<string> {
	if (act.kind !== 'close' && act.kind !== 'lift') return 'the bay has no node';
	await closureStage(sql, act);
	const change: NewChange = { kind: 'closure', bayId: act.bayId, nodeId: null };
	await allotAndWrite(
		sql,
		new Map([[act.siteId, { events: [], shown: [], other: [change] }]]),
		nowMs
	);
	return 'done';
}

async function place(
	room: Room,
	sql: Transaction,
	act: ActRow & { nodeId: number },
	{ preCommissioned }: { preCommissioned: boolean },
	nowMs: number
): Promise<string> {
	if (act.bayId === null) return 'no bay was named';
	const holder = await ingest.holderOfBay(sql, act.bayId, act.nodeId);
	if (holder !== null) return `the bay holds node ${holder}: withdraw it first`;
	const former = room.registry.byId(act.nodeId);
	const formerBay = former?.config.bayId ?? null;
	if (former !== undefined && formerBay !== null && formerBay !== act.bayId)
		await allotAndWrite(
			sql,
			new Map([[former.config.siteId, bareBay(former, formerBay, 'unplaced', nowMs)]]),
			nowMs
		);
	await ingest.placeNode(sql, act.nodeId, act.bayId, act.atMs, preCommissioned);
	await nodeState.clear(sql, act.nodeId, act.atMs);
	return 'done';
}

/** From here on the node's boots are counted anew; what was received under the old count is forgotten. */
async function acceptBoot(sql: Sql, nodeId: number, boot: number): Promise<string> {
	await received.forget(sql, nodeId);
	await run(sql, 'UPDATE node_fast SET heard_boot = ? WHERE node_id = ?', [boot, nodeId]);
	return 'done';
}

const ASK_EXPIRES_MS = 3_600_000;

async function ask(
	room: Room,
	sql: Sql,
	nodeId: number,
	byActor: string,
	nowMs: number
): Promise<string> {
	const entry = room.registry.byId(nodeId);
	if (entry === undefined || entry.live.heardBoot === null)
		return 'the node has not been heard yet';
	await commands.giveUp(sql, { nodeId, verb: 'report', otherThanBoot: null }, nowMs, 'superseded');
	await commands.order(sql, {
		nodeId,
		verb: 'report',
		report: { periodS: FAST_PERIOD_S, deltaMg: entry.config.deltaMg },
		boot: entry.live.heardBoot,
		cause: 'ask: a person',
		byActor,
		createdAtMs: nowMs,
		expiresAtMs: nowMs + ASK_EXPIRES_MS
	});
	return 'done';
}

/** After a batch with acts is committed: registrations that they changed are read again. */
export async function afterActs(room: Room, taken: readonly ActRow[]): Promise<void> {
	const changed = taken.filter(({ kind }) => kind === 'withdraw' || kind === 'parameters');
	const ids = changed.flatMap(({ nodeId }) => nodeId ?? []);
	if (ids.length === 0) return;
	const nowMs = Date.now();
	await room.registry.loadParameters(room.pool);
	await room.registry.loadSome(room.pool, { ids }, nowMs);
	room.groups.reconcile();
}
