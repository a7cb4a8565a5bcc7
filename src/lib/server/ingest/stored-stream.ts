import type { ActItem } from '$lib/detection/types';
import { actArgs } from '$lib/schemas/act';
import * as acts from '$lib/server/store/queries/acts';
import type { Sql } from '$lib/server/store/queries/bulk';
import type { Pointer } from '$lib/server/store/queries/node-state';
import * as pulses from '$lib/server/store/queries/pulses';
import * as readings from '$lib/server/store/queries/readings';
import { byTime, pointerOrder, type Queued } from './hosted-group';
import type { NodeEntry } from './node-entry';
import { compareOrder, eraAt, type Order } from './order';
import { pulseItem, rowItem } from './steps/convert';

/** Rows that come after another in order may lie this much before it in time (a clock set back). */
const BACK_MS = 3_600_000;

/** Where a node's stored rows are to be taken from. */
export interface Start {
	entry: NodeEntry;
	/** Only rows after it in order; null = all. */
	after: Pointer | null;
	/** Only rows from this event time on. */
	fromMs: number;
}

/** One node's items in order, each with the time by which it is merged with other nodes'. */
export function inOrder(items: Queued[]): Queued[] {
	items.sort((a, b) =>
		a.order === null || b.order === null
			? a.item.atMs - b.item.atMs
			: compareOrder(a.order, b.order)
	);
	let mergeAtMs = 0;
	for (const queued of items) {
		mergeAtMs = Math.max(mergeAtMs, queued.item.atMs);
		queued.mergeAtMs = mergeAtMs;
	}
	return items;
}

async function itemsOf(sql: Sql, start: Start, toMs: number): Promise<Queued[]> {
	const { entry, after } = start;
	const { acceptedBootsMs } = entry.live;
	const fromMs = Math.max(
		start.fromMs,
		entry.config.placedAtMs ?? 0,
		after === null ? 0 : after.atMs - BACK_MS
	);
	const limit = after === null ? null : pointerOrder(after, acceptedBootsMs);
	const queue: Queued[] = [];
	const put = (item: Queued['item'] & { boot: number; seq: number }, row: number) => {
		const order: Order = {
			era: eraAt(acceptedBootsMs, item.atMs),
			boot: item.boot,
			seq: item.seq,
			row
		};
		if (limit !== null && compareOrder(order, limit) <= 0) return;
		queue.push({ item, order, mergeAtMs: item.atMs, arrivedAtMs: 0 });
	};
	for (const row of await readings.moving(sql, entry.id, fromMs, toMs))
		put(rowItem(row, entry.config.profile), row.row);
	for (const pulse of await pulses.moving(sql, entry.id, fromMs, toMs))
		put(pulseItem(pulse, entry.config.profile), 0);
	return inOrder(queue);
}

/** What is stored of nodes from given starts to `toMs`, merged as live ingest merges it. */
export async function storedItems(
	sql: Sql,
	starts: readonly Start[],
	actsAfterMs: number,
	toMs: number
): Promise<Queued[]> {
	const merged: Queued[] = [];
	for (const start of starts) merged.push(...(await itemsOf(sql, start, toMs)));
	const ids = starts.map(({ entry }) => entry.id);
	for (const act of await acts.takenAfter(sql, ids, actsAfterMs)) {
		const item = act.atMs < toMs ? actItem(act) : null;
		if (item !== null) merged.push({ item, order: null, mergeAtMs: item.atMs, arrivedAtMs: 0 });
	}
	return merged.sort(byTime);
}

/** A change of a setting, not of the node itself: detection is given it as the item's own settings. */
export const isSetting = ({ kind, args }: Pick<acts.ActRow, 'kind' | 'args'>): boolean =>
	kind === 'parameters' && args !== '{}';

/** An act as detection takes it; null for those that concern ingest alone. */
export function actItem(row: acts.ActRow): ActItem | null {
	if (row.nodeId === null) return null;
	const base = { kind: 'act', actId: row.id, nodeId: row.nodeId, atMs: row.atMs } as const;
	const json = JSON.parse(row.args) as unknown;
	switch (row.kind) {
		case 'place':
			return { ...base, act: { kind: 'place', ...actArgs.place.parse(json) } };
		case 'accept':
			return { ...base, act: { kind: 'accept', ...actArgs.accept.parse(json), by: row.byActor } };
		case 'settle':
			return { ...base, act: { kind: 'settle', ...actArgs.settle.parse(json), by: row.byActor } };
		case 'undo_settle':
			return { ...base, act: { kind: 'undo_settle', ...actArgs.undo_settle.parse(json) } };
		case 'close': {
			const { toMs, reason } = actArgs.close.parse(json);
			return { ...base, act: { kind: 'close', toMs, reason } };
		}
		case 'lift':
		case 'withdraw':
			return { ...base, act: { kind: row.kind } };
		case 'parameters':
			return isSetting(row) ? null : { ...base, act: { kind: row.kind } };
		case 'accept_boot':
		case 'ask':
			return null;
	}
}
