import * as detection from '$lib/detection/group';
import type { GroupItem, GroupMember, NodeView, Outcome } from '$lib/detection/types';
import {
	FAST_BYTES,
	SLOW_BYTES,
	type Pointer,
	type SnapshotRow,
	type States
} from '$lib/server/store/queries/node-state';
import type { NodeEntry } from './node-entry';
import { spellAt } from './param-spells';
import { compareOrder, eraAt, firstDiffering, type Order } from './order';

/** A group waits at most this long, on arrival, for a bursting neighbour's rows (method, 'History and feed'). */
export const REORDER_MS = 2_000;

/** One item on its way into detection. */
export interface Queued {
	item: GroupItem;
	/** null for acts: they stand by time alone. */
	order: Order | null;
	/** Time by which it is merged with other nodes' items: never before an earlier item of its node. */
	mergeAtMs: number;
	arrivedAtMs: number;
}

/** Items of several nodes in the one order in which live ingest and replay both put them in. */
export const byTime = (a: Queued, b: Queued): number =>
	firstDiffering(a.mergeAtMs - b.mergeAtMs, a.item.nodeId - b.item.nodeId);

export interface Pumped {
	outcomes: Outcome[];
	/** Must go in by snapshot and replay. */
	late: Queued[];
	/** Nodes whose rows went in. */
	taken: Set<number>;
	/** Slow states that changed. */
	slow: SlowState[];
}

export interface SlowState {
	nodeId: number;
	state: Uint8Array;
}

/** Detection's state outgrew its column: the group is set aside rather than holding everybody up. */
export class StateTooLong extends RangeError {
	constructor(nodeId: number, bytes: number) {
		super(`Detection's state of node ${nodeId} has ${bytes} bytes.`);
	}
}

function fitting(nodeId: number, state: Uint8Array, most: number): Uint8Array {
	if (state.length > most) throw new StateTooLong(nodeId, state.length);
	return state;
}

/** A neighbour whose last two rows lie this near is bursting: its next row is about to come. */
const BURST_MS = 2_000;

/** Rows older than this at arrival are a backlog, which neighbours often bring at the same time. */
const BACKLOG_MS = 60_000;

interface Heard {
	newestMs: number;
	beforeMs: number;
	arrivedAtMs: number;
}

/** Nodes chained within 4 m, with detection's state and what waits to go into it. */
export class HostedGroup {
	#queue: Queued[] = [];
	#pumped: Queued[] = [];
	readonly #heard = new Map<number, Heard>();
	/** How far each member's rows are taken. */
	readonly pointers = new Map<number, Pointer | null>();
	readonly #entries: Map<number, NodeEntry>;
	/** Event time of the newest item taken, of any member. */
	newestAtMs = 0;
	lastSnapshotAtMs = 0;
	#slowWritten = new Map<number, number>();
	/** Event times for which the members' present settings hold. */
	#settled = { fromMs: Infinity, toMs: -Infinity };

	constructor(
		readonly entries: readonly NodeEntry[],
		readonly state: detection.Group,
		pointers: ReadonlyMap<number, Pointer | null>,
		readonly neighboursOf: (nodeId: number) => readonly number[]
	) {
		this.#entries = new Map(entries.map((entry) => [entry.id, entry]));
		for (const { id } of entries) {
			const pointer = pointers.get(id) ?? null;
			this.pointers.set(id, pointer);
			this.newestAtMs = Math.max(this.newestAtMs, pointer?.atMs ?? 0);
			this.#slowWritten.set(id, detection.slowRevision(state, id));
		}
	}

	get ids(): number[] {
		return this.entries.map(({ id }) => id);
	}

	/** What went in or waits since progress was last noted. */
	get unnoted(): readonly Queued[] {
		return [...this.#pumped, ...this.#queue];
	}

	get waiting(): number {
		return this.#queue.length;
	}

	/** When the oldest waiting item may no longer wait; null = nothing waits. */
	get dueAtMs(): number | null {
		let due: number | null = null;
		for (const { arrivedAtMs } of this.#queue)
			if (due === null || arrivedAtMs + REORDER_MS < due) due = arrivedAtMs + REORDER_MS;
		return due;
	}

	add(items: readonly Queued[]): void {
		for (const queued of items) {
			this.#queue.push(queued);
			if (queued.order !== null) this.#note(queued);
		}
	}

	#note({ item: { nodeId, atMs }, arrivedAtMs }: Queued): void {
		const heard = this.#heard.get(nodeId);
		if (heard === undefined) {
			this.#heard.set(nodeId, { newestMs: atMs, beforeMs: 0, arrivedAtMs });
			return;
		}
		heard.arrivedAtMs = Math.max(heard.arrivedAtMs, arrivedAtMs);
		if (atMs <= heard.newestMs) return;
		heard.beforeMs = heard.newestMs;
		heard.newestMs = atMs;
	}

	/** Puts in what may go in at `nowMs`; what must wait stays. */
	pump(nowMs: number): Pumped {
		const outcomes: Outcome[] = [];
		const late: Queued[] = [];
		const taken = new Set<number>();
		const rest: Queued[] = [];
		const blocked = new Set<number>();
		const behind = new Set<number>();
		this.#pumped = this.#queue;
		this.#queue = [];
		if (this.#pumped.length > 1) this.#pumped.sort(byTime);
		for (const queued of this.#pumped) {
			if (this.#mustWait(queued, blocked, nowMs)) {
				blocked.add(queued.item.nodeId);
				rest.push(queued);
			} else if (behind.has(queued.item.nodeId) || this.isLate(queued)) {
				// What follows of its node must not go in before it: it would leave a gap that never was.
				behind.add(queued.item.nodeId);
				late.push(queued);
			} else {
				this.take(queued, outcomes);
				taken.add(queued.item.nodeId);
			}
		}
		this.#queue = rest;
		for (const nodeId of taken) this.fast(nodeId);
		return { outcomes, late, taken, slow: this.changedSlow() };
	}

	#mustWait(queued: Queued, blocked: ReadonlySet<number>, nowMs: number): boolean {
		if (nowMs - queued.arrivedAtMs >= REORDER_MS) return false;
		const { nodeId } = queued.item;
		// Nothing overtakes an earlier item of its own node or of a neighbour.
		if (blocked.size > 0) {
			if (blocked.has(nodeId)) return true;
			if (this.neighboursOf(nodeId).some((id) => blocked.has(id))) return true;
		}
		if (queued.item.kind === 'act') return false;
		const near = this.neighboursOf(nodeId);
		if (near.some((id) => this.#catchesUp(id, queued))) return true;
		return detection.mustWait(this.state, queued.item, (id) =>
			near.includes(id) ? this.#heardTo(id) : Infinity
		);
	}

	/** A neighbour that is bringing its own backlog of the same time: merged, neither finds the other late. */
	#catchesUp(nodeId: number, { item, arrivedAtMs }: Queued): boolean {
		if (arrivedAtMs - item.atMs < BACKLOG_MS) return false;
		const heard = this.#heard.get(nodeId);
		return (
			heard !== undefined &&
			heard.newestMs < item.atMs &&
			Math.abs(arrivedAtMs - heard.arrivedAtMs) < REORDER_MS
		);
	}

	/** Only a neighbour that bursts is worth waiting for: a heartbeat comes when it comes. */
	#heardTo(nodeId: number): number {
		const heard = this.#heard.get(nodeId);
		if (heard === undefined || heard.newestMs - heard.beforeMs > BURST_MS) return Infinity;
		return heard.newestMs;
	}

	/** Whether its node has already gone past it. */
	isBehindOwn({ item, order }: Queued): boolean {
		const entry = this.#entries.get(item.nodeId);
		const pointer = this.pointers.get(item.nodeId) ?? null;
		if (order === null || pointer === null || entry === undefined) return false;
		return compareOrder(order, pointerOrder(pointer, entry.live.acceptedBootsMs)) <= 0;
	}

	isLate(queued: Queued): boolean {
		return this.isBehindOwn(queued) || detection.isLate(this.state, queued.item);
	}

	/** The settings were read again. */
	settingsMayDiffer(): void {
		this.#settled = { fromMs: Infinity, toMs: -Infinity };
	}

	/** An item is judged by the settings of its own time: a change moves nothing that came before it. */
	#settle(atMs: number): void {
		if (atMs >= this.#settled.fromMs && atMs < this.#settled.toMs) return;
		const span = { fromMs: -Infinity, toMs: Infinity };
		for (const { config } of this.entries) {
			const { params, fromMs, toMs } = spellAt(config.spells, atMs);
			span.fromMs = Math.max(span.fromMs, fromMs);
			span.toMs = Math.min(span.toMs, toMs);
			if (config.member !== null && config.spells.length > 1)
				detection.setMember(this.state, { ...config.member, params });
		}
		this.#settled = span;
	}

	/** Puts one item in, whatever its time. */
	take(queued: Queued, outcomes: Outcome[]): void {
		const { item, order } = queued;
		this.#settle(item.atMs);
		for (const outcome of detection.advance(this.state, item)) outcomes.push(outcome);
		this.newestAtMs = Math.max(this.newestAtMs, item.atMs);
		if (order !== null)
			this.pointers.set(item.nodeId, {
				atMs: item.atMs,
				boot: order.boot,
				seq: order.seq,
				row: order.row
			});
	}

	dropQueue(): void {
		this.#queue = [];
	}

	/** Tells each member's own memory how far it is taken and from when on stored rows wait. */
	noteProgress(): void {
		this.#pumped = [];
		for (const { id, live } of this.entries) {
			live.pointer = this.pointers.get(id) ?? null;
			live.waitingFromMs = null;
		}
		for (const { item, order } of this.#queue) {
			const live = this.#entries.get(item.nodeId)?.live;
			if (live === undefined || order === null) continue;
			live.waitingFromMs = Math.min(live.waitingFromMs ?? item.atMs, item.atMs);
		}
	}

	view(nodeId: number): NodeView {
		return detection.view(this.state, nodeId);
	}

	fast(nodeId: number): Uint8Array {
		return fitting(nodeId, detection.encodeFast(this.state, nodeId), FAST_BYTES);
	}

	/** The slow states that changed since they were last asked for. */
	changedSlow(): SlowState[] {
		const changed: SlowState[] = [];
		for (const { id } of this.entries) {
			const revision = detection.slowRevision(this.state, id);
			if (this.#slowWritten.get(id) === revision) continue;
			this.#slowWritten.set(id, revision);
			changed.push({ nodeId: id, state: this.#slow(id) });
		}
		return changed;
	}

	/** All slow states, whatever was written before. */
	allSlow(): SlowState[] {
		this.#slowWritten.clear();
		return this.changedSlow();
	}

	snapshot(takenAtMs: number, daily: boolean): SnapshotRow[] {
		this.lastSnapshotAtMs = this.newestAtMs;
		return this.entries.map(({ id }) => ({
			nodeId: id,
			atMs: this.newestAtMs,
			takenAtMs,
			daily,
			pointer: this.pointers.get(id) ?? null,
			fast: this.fast(id),
			slow: this.#slow(id)
		}));
	}

	#slow(nodeId: number): Uint8Array {
		return fitting(nodeId, detection.encodeSlow(this.state, nodeId), SLOW_BYTES);
	}
}

/** Detection's state of a group from stored bytes; a member without any begins anew. */
export function restoreState(
	members: readonly GroupMember[],
	stored: readonly Pick<States, 'nodeId' | 'fast' | 'slow'>[]
): detection.Group {
	const byId = new Map(stored.map((s) => [s.nodeId, s]));
	return detection.restore(
		[...members],
		members.map(({ nodeId }) => byId.get(nodeId)?.fast ?? null),
		members.map(({ nodeId }) => byId.get(nodeId)?.slow ?? null)
	);
}

export const pointerOrder = (pointer: Pointer, acceptedBootsMs: readonly number[]): Order => ({
	era: eraAt(acceptedBootsMs, pointer.atMs),
	boot: pointer.boot,
	seq: pointer.seq,
	row: pointer.row
});
