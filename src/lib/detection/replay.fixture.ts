import { advance, encodeFast, encodeSlow, isLate, mustWait, newGroup, restore } from './group';
import type { Group } from './state';
import type { GroupItem, GroupMember, Outcome } from './types';
import { T0, bays, beats, drives, normal, plus, times, type Reading } from './rows.fixture';

/** A caller of detection as DEVELOPERS.md describes it: waits, goes back to a snapshot, replays. */

const WAIT_MS = 2000;
const SNAPSHOT_MS = 60_000;

export interface Arrived {
	arrivedAtMs: number;
	item: GroupItem;
}

/** Time, then node; within a node as it came. */
const earlier = (
	a: Pick<GroupItem, 'atMs' | 'nodeId'>,
	b: Pick<GroupItem, 'atMs' | 'nodeId'>
): number => (a.atMs === b.atMs ? a.nodeId - b.nodeId : a.atMs - b.atMs);
export const sorted = (items: readonly GroupItem[]): GroupItem[] => [...items].sort(earlier);

interface Snapshot {
	atMs: number;
	fast: Uint8Array[];
	slow: Uint8Array[];
}

/** What a caller holds: outcomes with the items that brought them, so that a replay can drop the tail. */
export class Caller {
	group: Group;
	replays = 0;
	private done: { item: GroupItem; out: Outcome[] }[] = [];
	private snapshots: Snapshot[] = [];
	private newestMs = -1;
	private heard = new Map<number, number>();

	constructor(readonly members: GroupMember[]) {
		this.group = newGroup(members);
		this.keep(0);
	}

	outcomes(): Outcome[] {
		return this.done.flatMap((d) => d.out);
	}

	/** Items by arrival; each waits as mustWait says, 2 s of arrival at the most. */
	take(arrived: readonly Arrived[]): void {
		const waiting: Arrived[] = [];
		const heardTo = (id: number) => this.heard.get(id) ?? 0;
		for (const next of [...arrived].sort((a, b) => a.arrivedAtMs - b.arrivedAtMs)) {
			this.heard.set(next.item.nodeId, Math.max(heardTo(next.item.nodeId), next.item.atMs));
			waiting.push(next);
			waiting.sort((a, b) => earlier(a.item, b.item));
			for (;;) {
				const first = waiting[0];
				if (first === undefined) break;
				const late = next.arrivedAtMs - first.arrivedAtMs >= WAIT_MS;
				if (!late && mustWait(this.group, first.item, heardTo)) break;
				waiting.shift();
				this.put(first.item);
			}
		}
		for (const left of waiting) this.put(left.item);
	}

	put(item: GroupItem): void {
		if (isLate(this.group, item)) this.goBack(item);
		else this.advance(item);
	}

	private advance(item: GroupItem): void {
		// A snapshot that lacks this row would lose it in a replay.
		this.snapshots = this.snapshots.filter((s) => s.atMs <= item.atMs);
		if (item.atMs - (this.snapshots.at(-1)?.atMs ?? 0) >= SNAPSHOT_MS) this.keep(item.atMs);
		this.newestMs = Math.max(this.newestMs, item.atMs);
		this.done.push({ item, out: [...advance(this.group, item)] });
	}

	/** State of all nodes as of before an item: items at or after `atMs` are not in it. */
	private keep(atMs: number): void {
		if (this.newestMs >= atMs) return;
		const ids = this.members.map((m) => m.nodeId);
		this.snapshots.push({
			atMs,
			fast: ids.map((id) => encodeFast(this.group, id)),
			slow: ids.map((id) => encodeSlow(this.group, id))
		});
	}

	private goBack(item: GroupItem): void {
		this.replays++;
		this.snapshots = this.snapshots.filter((s) => s.atMs <= item.atMs);
		const from = this.snapshots.at(-1);
		if (from === undefined) throw new Error('no snapshot before a late row');
		this.group = restore(this.members, from.fast, from.slow);
		const again = this.done.filter((d) => d.item.atMs >= from.atMs).map((d) => d.item);
		this.done = this.done.filter((d) => d.item.atMs < from.atMs);
		this.newestMs = from.atMs - 1;
		for (const next of sorted([...again, item])) this.advance(next);
	}
}

/** A life of three bays side by side: vehicles, echoes, passes, a simultaneous arrival, lost bursts. */
export function streetLife(
	seed: number,
	minutes = 40
): { members: GroupMember[]; items: GroupItem[] } {
	const members = bays(3);
	const next = normal(seed);
	const pick = (n: number) => Math.floor(Math.abs(next() * 997)) % n;
	const quiet = members.map((_, i) => [120 + 40 * i, -60 - 20 * i, 420 - 10 * i] as const);
	const levels = quiet.map((q) => plus([...q], [0, 0, 0]));
	const startMs = T0 + 5 * 60_000;
	const readings: Reading[] = members.flatMap((m, i) =>
		beats(m.nodeId, T0 + 2000 + 37 * i, T0 + 180_000, [...quiet[i]!], 2000)
	);
	const taken: boolean[] = members.map(() => false);
	let atMs = startMs;
	const phases = members.map((_, i) => 7000 + 13_000 * i + 100 * pick(50));
	const beatTo = (untilMs: number, fromMs: number) => {
		members.forEach((m, i) => {
			const first = Math.ceil((fromMs - phases[i]!) / 60_000) * 60_000 + phases[i]!;
			readings.push(...beats(m.nodeId, first, untilMs, levels[i]!));
		});
	};
	let beatFrom = T0 + 180_000;
	while (atMs < startMs + minutes * 60_000) {
		beatTo(atMs, beatFrom);
		const movers = pick(4) < 1 ? [pick(3), pick(3)] : [pick(3)];
		for (const [k, i] of [...new Set(movers)].entries()) {
			const size = times([90 + 10 * pick(20), -40 + 15 * pick(9), 60], taken[i] === true ? -1 : 1);
			const from = levels[i]!;
			const to =
				taken[i] === true ? plus([...quiet[i]!], [next(), next(), next()]) : plus(from, size);
			taken[i] = taken[i] !== true;
			levels[i] = to;
			const onset = atMs + k * 700 + 10 * pick(90);
			readings.push(...drives(i + 1, onset, from, to).filter(() => pick(9) !== 0));
			for (const j of [i - 1, i + 1]) {
				if (j < 0 || j > 2 || movers.includes(j)) continue;
				const echo = times(plus(to, times(from, -1)), 0.1 + 0.05 * pick(6));
				const moved = plus(levels[j]!, echo);
				readings.push(...drives(j + 1, onset + 40, levels[j]!, moved, plus(moved, [2, 2, 2])));
				levels[j] = moved;
			}
		}
		beatFrom = atMs + 8000;
		atMs += 45_000 + 1000 * pick(200);
	}
	beatTo(atMs, beatFrom);
	const byTime = readings.sort(earlier);
	const lastOf = new Map<number, number>();
	const rows = byTime.flatMap((r, seq): GroupItem[] => {
		if (r.atMs <= (lastOf.get(r.nodeId) ?? 0)) return [];
		lastOf.set(r.nodeId, r.atMs);
		const noisy = ([0, 1, 2] as const).map((i) => r.fieldMg[i] + 0.5 * next());
		return [
			{
				kind: 'row',
				nodeId: r.nodeId,
				atMs: r.atMs,
				boot: 1,
				seq,
				row: 0,
				rawMg: noisy as unknown as readonly [number, number, number],
				polarity: 1,
				tempC: 15,
				clipped: false
			}
		];
	});
	const acts = members.flatMap((m): GroupItem[] => [
		{
			kind: 'act',
			actId: m.nodeId,
			nodeId: m.nodeId,
			atMs: T0,
			act: { kind: 'place', preCommissioned: false }
		},
		{
			kind: 'act',
			actId: 10 + m.nodeId,
			nodeId: m.nodeId,
			atMs: T0 + 180_000 + m.nodeId,
			act: { kind: 'accept', seenEmpty: true, by: 'walker' }
		}
	]);
	return { members, items: sorted([...acts, ...rows]) };
}
