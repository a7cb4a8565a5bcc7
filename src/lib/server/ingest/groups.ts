import type { GroupMember } from '$lib/detection/types';
import { setMember, type Group } from '$lib/detection/group';
import type { Sql } from '$lib/server/store/queries/bulk';
import * as nodeState from '$lib/server/store/queries/node-state';
import { HostedGroup, restoreState, type Queued } from './hosted-group';
import type { NodeEntry } from './node-entry';
import type { Registry } from './registry';
import { storedItems, type Start } from './stored-stream';

/** The neighbour groups in memory; loaded when first needed, dropped after an error or when they change. */
export class Groups {
	readonly #registry: Registry;
	readonly #byNode = new Map<number, HostedGroup>();
	readonly #loaded = new Set<HostedGroup>();

	readonly #isAside: (ids: readonly number[]) => boolean;

	constructor(registry: Registry, isAside: (ids: readonly number[]) => boolean = () => false) {
		this.#registry = registry;
		this.#isAside = isAside;
	}

	of(nodeId: number): HostedGroup | undefined {
		return this.#byNode.get(nodeId);
	}

	all(): IterableIterator<HostedGroup> {
		return this.#loaded.values();
	}

	/** Forgets the groups of these nodes; what waits in them is stored and comes back with the next load. */
	forget(nodeIds: Iterable<number>): void {
		for (const id of nodeIds) {
			const group = this.#byNode.get(id);
			if (group === undefined) continue;
			this.#loaded.delete(group);
			for (const member of group.ids) this.#byNode.delete(member);
		}
	}

	forgetAll(): void {
		this.#byNode.clear();
		this.#loaded.clear();
	}

	/** After the registry was read again: drops groups whose members changed, tells the others of theirs. */
	reconcile(): void {
		for (const group of [...this.#loaded]) {
			const ids = group.ids;
			const now = this.#registry.groupOf(ids[0] as number);
			const same =
				now !== undefined && now.length === ids.length && now.every((id, i) => id === ids[i]);
			if (!same) this.forget(ids);
			else {
				for (const { config } of group.entries)
					if (config.member !== null) setMember(group.state, config.member);
				group.settingsMayDiffer();
			}
		}
	}

	/** Loads the groups of these nodes that are not in memory, with the stored rows that still wait. */
	async load(sql: Sql, nodeIds: Iterable<number>, nowMs: number): Promise<void> {
		const wanted = new Map<number, readonly number[]>();
		for (const id of nodeIds) {
			const ids = this.#byNode.has(id) ? undefined : this.#registry.groupOf(id);
			if (ids !== undefined && !this.#isAside(ids)) wanted.set(ids[0] as number, ids);
		}
		if (wanted.size === 0) return;
		const stored = await nodeState.states(sql, [...wanted.values()].flat());
		const byId = new Map(stored.map((state) => [state.nodeId, state]));
		const snapshots = await nodeState.newestSnapshots(sql, [...wanted.keys()]);
		for (const ids of wanted.values()) {
			// A member may still sit in a group of before a neighbour came: what waits there is stored.
			this.forget(ids);
			const group = this.#build(ids, byId);
			group.lastSnapshotAtMs = snapshots.get(ids[0] as number) ?? 0;
			group.add(await waitingItems(sql, group.entries, byId, nowMs));
			this.#keep(group);
		}
	}

	/** Takes the place of the group that holds the same members. */
	replace(group: HostedGroup): void {
		this.forget(group.ids);
		this.#keep(group);
	}

	#keep(group: HostedGroup): void {
		this.#loaded.add(group);
		for (const id of group.ids) this.#byNode.set(id, group);
	}

	#build(ids: readonly number[], stored: ReadonlyMap<number, nodeState.States>): HostedGroup {
		const entries = this.entriesOf(ids);
		const states = ids.flatMap((id) => stored.get(id) ?? []);
		const state = restoreState(membersOf(entries), states);
		const pointers = new Map(entries.map(({ id, live }) => [id, live.pointer]));
		return this.host(entries, state, pointers);
	}

	/** A group that is not (yet) the one in memory. */
	host(
		entries: readonly NodeEntry[],
		state: Group,
		pointers: ReadonlyMap<number, nodeState.Pointer | null>
	): HostedGroup {
		return new HostedGroup(entries, state, pointers, (id) => this.#registry.neighboursOf(id));
	}

	entriesOf(ids: readonly number[]): NodeEntry[] {
		return ids.flatMap((id) => this.#registry.byId(id) ?? []);
	}
}

export const membersOf = (entries: readonly NodeEntry[]): GroupMember[] =>
	entries.flatMap(({ config }) => config.member ?? []);

/** Stored rows that detection has yet to take, and for a node just placed the act itself. */
async function waitingItems(
	sql: Sql,
	entries: readonly NodeEntry[],
	stored: ReadonlyMap<number, nodeState.States>,
	nowMs: number
): Promise<Queued[]> {
	const starts: Start[] = entries.flatMap((entry) =>
		entry.live.waitingFromMs === null
			? []
			: [{ entry, after: entry.live.pointer, fromMs: entry.live.waitingFromMs }]
	);
	if (starts.length === 0) return [];
	const known = starts.filter(({ entry }) => stored.has(entry.id));
	const fresh = starts.filter(({ entry }) => !stored.has(entry.id));
	const toMs = nowMs + 86_400_000;
	const items = await storedItems(sql, known, Number.MAX_SAFE_INTEGER, toMs);
	for (const start of fresh)
		items.push(
			...(await storedItems(sql, [start], (start.entry.config.placedAtMs ?? 0) - 1, toMs))
		);
	// arrivedAtMs 0: they have waited long enough.
	return items;
}
