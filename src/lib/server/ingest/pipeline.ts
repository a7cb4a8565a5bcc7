import { setTimeout as sleep } from 'node:timers/promises';
import type { NodeView } from '$lib/detection/types';
import type { Log } from '$lib/server/log';
import type { Secret } from '$lib/server/secret';
import type { Store } from '$lib/server/store/connect';
import type { ActRow } from '$lib/server/store/queries/acts';
import * as actQueries from '$lib/server/store/queries/acts';
import { select } from '$lib/server/store/queries/bulk';
import * as driftState from '$lib/server/store/queries/drift-state';
import { runBatch, viewOf, type Batch, type Room, type Touched } from './batch';
import { DriftFrontier } from './drift-frontier';
import { Groups } from './groups';
import type { HostedGroup } from './hosted-group';
import { Mutex } from './mutex';
import { openAll } from './opening';
import { PipelineCounters, type PipelineStatus } from './pipeline-status';
import { Registry } from './registry';
import { SeenBlocks } from './seen-blocks';
import { afterActs, isStructural, runStructural } from './structural-acts';
import type { HeldMessage, Subscriber } from './subscriber-types';
import type { OpenedMessage } from './steps/open';
import { LeaseLost, Transactions } from './transaction';

export interface PipelineDeps {
	store: Store;
	subscriber: Subscriber;
	secret: Secret;
	log: Log;
	/** Name under which the lease is held. */
	holder: string;
	/** Whether acknowledgements may be given (disk space); asked before each batch. */
	mayStore: () => boolean;
	/** Another copy has the lease. */
	onLost: () => void;
}

export interface Pipeline {
	/** Acts, commands and directory are looked at now. */
	nudge(): void;
	status(): PipelineStatus;
	/** Detection's view of a node in memory; null while its group is not loaded. */
	viewOf(nodeId: number): NodeView | null;
	readonly room: Room;
	/** Runs work of its own between two batches. */
	exclusive<T>(work: () => Promise<T>): Promise<T>;
	/** Groups of these nodes are loaded with the next batch. */
	wake(nodeIds?: readonly number[]): void;
	close(): Promise<void>;
}

/** Two batches fit into what the broker sends ahead of its receipts: one is opened while one is stored. */
const MOST_MESSAGES = 2_000;
/** How often acts are looked for when nobody nudges: another copy's routes may have written them. */
const ACTS_EVERY_MS = 500;
const RETRY_MS = 250;
/** Deadlock, and a lock that was not had in time: the whole batch again. */
const LOCK_ERRORS = new Set([1213, 1205]);
const SET_ASIDE_MS = 60_000;

export async function startPipeline(deps: PipelineDeps): Promise<Pipeline> {
	const pipeline = new RunningPipeline(deps);
	await pipeline.begin();
	return pipeline;
}

class RunningPipeline implements Pipeline {
	readonly room: Room;
	readonly #deps: PipelineDeps;
	readonly #mutex = new Mutex();
	readonly #counters = new PipelineCounters();
	#closed = false;
	#wakeUp: (() => void) | null = null;
	#nudged = true;
	#actsAtMs = 0;
	#timer: NodeJS.Timeout | null = null;
	#loop: Promise<void> = Promise.resolve();
	readonly #toLoad = new Set<number>();
	readonly #aside = new Map<number, number>();

	constructor(deps: PipelineDeps) {
		this.#deps = deps;
		const registry = new Registry(deps.secret);
		let lastStampMs = 0;
		this.room = {
			pool: deps.store.pool,
			registry,
			groups: new Groups(registry, (ids) => this.#isAside(ids)),
			seen: new SeenBlocks(),
			frontier: new DriftFrontier(),
			log: deps.log,
			transactions: new Transactions(async () => await deps.store.batchConnection(), deps.holder),
			stamps: {
				next: () => (lastStampMs = Math.max(lastStampMs + 1, Date.now())),
				atLeast: (ms) => (lastStampMs = Math.max(lastStampMs, ms))
			},
			setAside: (group, error) => this.#setAside(group, error)
		};
	}

	/** Reads what must be known before the first message. Throws while the database does not answer. */
	async begin(): Promise<void> {
		const { pool, registry, stamps } = this.room;
		const [newest] = await select<{ atMs: number | null }>(
			pool,
			'SELECT MAX(taken_at_ms) AS atMs FROM node_snapshot'
		);
		stamps.atLeast(newest?.atMs ?? 0);
		for (const { siteId, closedToMs } of await driftState.sites(pool))
			this.room.frontier.set(siteId, closedToMs ?? 0);
		await registry.loadAll(pool, Date.now());
		for (const { id, live } of registry.all())
			if (live.waitingFromMs !== null) this.#toLoad.add(id);
		this.#loop = this.#run();
	}

	nudge(): void {
		this.#nudged = true;
		this.#wakeUp?.();
	}

	wake(nodeIds: readonly number[] = []): void {
		for (const id of nodeIds) this.#toLoad.add(id);
		this.#wakeUp?.();
	}

	status(): PipelineStatus {
		return this.#counters.status(this.room.groups);
	}

	viewOf(nodeId: number): NodeView | null {
		const entry = this.room.registry.byId(nodeId);
		return entry === undefined ? null : viewOf(this.room, entry);
	}

	async exclusive<T>(work: () => Promise<T>): Promise<T> {
		return await this.#mutex.run(work);
	}

	async close(): Promise<void> {
		this.#closed = true;
		this.#wakeUp?.();
		await this.#loop;
		await this.#mutex.run(async () => this.room.transactions.close());
		if (this.#timer !== null) clearTimeout(this.#timer);
	}

	async #run(): Promise<void> {
		let taking: Promise<HeldMessage[]> | null = null;
		let storing: Promise<void> = Promise.resolve();
		while (!this.#closed) {
			taking ??= this.#deps.subscriber.take(MOST_MESSAGES);
			const messages = await Promise.race([taking, this.#sleep()]);
			if (this.#closed) break;
			if (messages !== null) taking = null;
			const taken = messages ?? [];
			this.#counters.took(taken);
			// Opened while the batch before is still being stored: signatures cost more than anything else.
			const opened = await this.#patiently(async () => await this.#open(taken));
			await storing;
			if (opened === null) break;
			storing = this.#mutex.run(async () => await this.#store(taken, opened));
		}
		await storing;
	}

	/** Until somebody wakes the pipeline or a waiting row is due. */
	async #sleep(): Promise<null> {
		if (this.#nudged || this.#toLoad.size > 0) return null;
		await new Promise<void>((resolve) => {
			this.#wakeUp = resolve;
			if (this.#timer !== null) clearTimeout(this.#timer);
			this.#timer = setTimeout(resolve, this.#sleepMs());
		});
		this.#wakeUp = null;
		return null;
	}

	#sleepMs(): number {
		let ms = ACTS_EVERY_MS;
		for (const group of this.room.groups.all()) {
			const { dueAtMs } = group;
			if (dueAtMs !== null) ms = Math.min(ms, dueAtMs - Date.now());
		}
		return Math.max(1, ms);
	}

	async #open(messages: readonly HeldMessage[]): Promise<OpenedMessage[]> {
		return await openAll(this.room, messages, Date.now());
	}

	/** Acts that are due, then the batch; neither ends before it is stored or the pipeline closes. */
	async #store(taken: readonly HeldMessage[], opened: readonly OpenedMessage[]): Promise<void> {
		const acts = await this.#patiently(async () => await this.#takeActs());
		if (acts === null) return;
		const busy = taken.length > 0 || acts.length > 0 || this.#toLoad.size > 0 || this.#isRowDue();
		if (!busy) return;
		const touched: Touched = { nodeIds: new Set(this.#toLoad) };
		const done = await this.#patiently(
			async () => await this.#attempt({ opened, acts, load: [...this.#toLoad] }, touched),
			async () => await this.#forget(touched)
		);
		if (done === null) return;
		this.#toLoad.clear();
		this.#deps.subscriber.settle(taken);
		this.#counters.stored(taken, done, Date.now());
	}

	#isRowDue(): boolean {
		const nowMs = Date.now();
		for (const group of this.room.groups.all())
			if ((group.dueAtMs ?? Infinity) <= nowMs) return true;
		return false;
	}

	async #attempt(batch: Batch, touched: Touched) {
		const work = await runBatch(this.room, batch, touched, Date.now());
		this.room.frontier.noteJudged(work);
		this.room.seen.trim(touched.nodeIds);
		for (const facts of work.facts.values()) this.room.registry.adoptHabit(facts.nodeId, facts);
		await afterActs(this.room, batch.acts);
		return work;
	}

	/** Structural acts are run by themselves; the others up to the next structural one go with the batch. */
	async #takeActs(): Promise<ActRow[]> {
		const nowMs = Date.now();
		if (!this.#nudged && nowMs - this.#actsAtMs < ACTS_EVERY_MS) return [];
		this.#nudged = false;
		this.#actsAtMs = nowMs;
		const all = await actQueries.due(this.room.pool, nowMs, 500);
		// Acts on a node whose detection is set aside wait for it.
		const due = all.filter(({ nodeId }) => nodeId === null || !this.#isAside([nodeId]));
		const first = due.findIndex(isStructural);
		if (first !== 0) {
			// What stands behind a structural act comes at once in the next round.
			if (first > 0) this.#nudged = true;
			return first === -1 ? due : due.slice(0, first);
		}
		this.#nudged = true;
		const after = due.findIndex((act) => !isStructural(act));
		const together = after === -1 ? due : due.slice(0, after);
		const woken = await runStructural(this.room, together, nowMs);
		for (const id of woken) this.#toLoad.add(id);
		return [];
	}

	/** After any error between BEGIN and the answer to COMMIT: what is stored is what is known. */
	async #forget({ nodeIds }: Touched): Promise<void> {
		const { registry, groups, seen, pool } = this.room;
		const all = new Set(nodeIds);
		for (const id of nodeIds) for (const member of registry.groupOf(id) ?? []) all.add(member);
		groups.forget(all);
		for (const id of all) seen.forget(id);
		await registry.loadLives(pool, [...all]);
		for (const id of all)
			if ((registry.byId(id)?.live.waitingFromMs ?? null) !== null) this.#toLoad.add(id);
	}

	/** Runs until it succeeds; null when the pipeline closes or loses its lease first. */
	async #patiently<T>(
		work: () => Promise<T>,
		recover: () => Promise<void> = async () => undefined
	): Promise<T | null> {
		let mustRecover = false;
		for (let tries = 0; !this.#closed; tries += 1) {
			try {
				if (!this.#deps.mayStore()) {
					this.#counters.held('disk_full');
					await sleep(RETRY_MS);
					continue;
				}
				if (mustRecover) await recover();
				mustRecover = false;
				const result = await work();
				this.#counters.held(null);
				return result;
			} catch (error) {
				mustRecover = true;
				if (error instanceof LeaseLost) {
					this.#closed = true;
					this.#deps.onLost();
					return null;
				}
				this.#counters.failed(error);
				const { errno } = error as { errno?: number };
				if (tries % 40 === 0 || LOCK_ERRORS.has(errno ?? 0))
					this.#deps.log.warn({ errno, message: (error as Error).message }, 'batch tried again');
				await sleep(LOCK_ERRORS.has(errno ?? 0) ? 5 : RETRY_MS);
			}
		}
		return null;
	}

	#setAside(group: HostedGroup, error: unknown): void {
		this.#deps.log.error(
			{
				nodes: group.ids.slice(0, 20),
				message: (error as Error).message,
				stack: (error as Error).stack
			},
			'detection of a group is set aside for a minute'
		);
		this.#counters.setAside += 1;
		for (const id of group.ids) this.#aside.set(id, Date.now() + SET_ASIDE_MS);
		for (const { item, order } of group.unnoted) {
			const live = this.room.registry.byId(item.nodeId)?.live;
			if (live === undefined || order === null) continue;
			live.waitingFromMs = Math.min(live.waitingFromMs ?? item.atMs, item.atMs);
		}
		this.room.groups.forget(group.ids);
	}

	#isAside(ids: readonly number[]): boolean {
		const nowMs = Date.now();
		return ids.some((id) => (this.#aside.get(id) ?? 0) > nowMs);
	}
}
