import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { advance, encodeFast, encodeSlow, newGroup, restore, slowRevision, view } from './group';
import { Caller, sorted, streetLife, type Arrived } from './replay.fixture';
import { uniform } from './rows.fixture';
import type { GroupItem, GroupMember, Outcome } from './types';

const RUNS = { numRuns: 25 };
/** Two cores are shared when all suites run. */
const PATIENCE_MS = 60_000;
const seeds = fc.integer({ min: 1, max: 100_000 });

function undisturbed(members: GroupMember[], items: readonly GroupItem[]): Outcome[] {
	const group = newGroup(members);
	return items.flatMap((item) => [...advance(group, item)]);
}

/** Each message arrives up to `skewMs` late; a node's own rows keep their order. */
function skewed(items: readonly GroupItem[], skewMs: number, seed: number): Arrived[] {
	const next = uniform(seed);
	const last = new Map<number, number>();
	return items.map((item) => {
		const atMs = Math.max(item.atMs + next() * skewMs, (last.get(item.nodeId) ?? 0) + 0.001);
		last.set(item.nodeId, atMs);
		return { arrivedAtMs: atMs, item };
	});
}

const nodeOf = (o: Outcome): number =>
	o.kind === 'enter' ? o.entry.nodeId : o.kind === 'act_done' ? o.actId % 10 : o.nodeId;

/** Quiet nodes are independent: their outcomes may come in another order among nodes, never within one. */
const byNode = (outcomes: readonly Outcome[]): Outcome[][] =>
	[1, 2, 3].map((id) => outcomes.filter((o) => nodeOf(o) === id));

describe('groups and waiting', () => {
	test('the invented street has arrivals, departures and echoes in it', () => {
		const kinds = new Set<string>();
		let stated = 0;
		for (const seed of [1, 2, 3, 4, 5]) {
			const { members, items } = streetLife(seed);
			for (const o of undisturbed(members, items)) {
				if (o.kind === 'enter') kinds.add(o.entry.type);
				if (o.kind === 'enter') stated++;
			}
		}
		expect([...kinds].sort()).toEqual(expect.arrayContaining(['arrival', 'departure', 'known']));
		expect(stated).toBeGreaterThan(30);
	});

	test(
		'neighbours’ rows with up to 2 s of skew, put through mustWait, tell the same as in order',
		() => {
			fc.assert(
				fc.property(seeds, seeds, (life, skew) => {
					const { members, items } = streetLife(life, 20);
					const caller = new Caller(members);
					caller.take(skewed(items, 2000, skew));
					expect(byNode(caller.outcomes())).toEqual(byNode(undisturbed(members, items)));
				}),
				RUNS
			);
		},
		PATIENCE_MS
	);

	test(
		'a row minutes late, put in by snapshot and replay, leaves what an undisturbed run leaves',
		() => {
			fc.assert(
				fc.property(seeds, fc.integer({ min: 200, max: 900 }), (life, pick) => {
					const { members, items } = streetLife(life, 20);
					const late = items[Math.min(pick, items.length - 30)]!;
					const rest = items.filter((item) => item !== late);
					const caller = new Caller(members);
					for (const item of rest.slice(0, -5)) caller.put(item);
					caller.put(late);
					for (const item of rest.slice(-5)) caller.put(item);
					expect(caller.outcomes()).toEqual(undisturbed(members, items));
				}),
				RUNS
			);
		},
		PATIENCE_MS
	);
});

describe('storage', () => {
	test(
		'storing and loading after any item changes nothing that follows',
		() => {
			fc.assert(
				fc.property(
					seeds,
					fc.array(fc.integer({ min: 1, max: 1500 }), { maxLength: 6 }),
					(life, cuts) => {
						const { members, items } = streetLife(life, 20);
						const at = new Set(cuts);
						let group = newGroup(members);
						const out = items.flatMap((item, i) => {
							if (at.has(i)) {
								const ids = members.map((m) => m.nodeId);
								group = restore(
									members,
									ids.map((id) => encodeFast(group, id)),
									ids.map((id) => encodeSlow(group, id))
								);
							}
							return [...advance(group, item)];
						});
						expect(out).toEqual(undisturbed(members, items));
					}
				),
				RUNS
			);
		},
		PATIENCE_MS
	);

	test('what is stored again is the same to the bit, and the views agree', () => {
		const { members, items } = streetLife(7);
		const group = newGroup(members);
		for (const item of items) advance(group, item);
		const ids = members.map((m) => m.nodeId);
		const fast = ids.map((id) => encodeFast(group, id));
		const slow = ids.map((id) => encodeSlow(group, id));
		const back = restore(members, fast, slow);
		for (const [i, id] of ids.entries()) {
			expect(encodeFast(back, id)).toEqual(fast[i]);
			expect(encodeSlow(back, id)).toEqual(slow[i]);
			expect(view(back, id)).toEqual(view(group, id));
		}
	});

	test('fast state is at most 300 bytes and slow state 4 kB, after every item', () => {
		const { members, items } = streetLife(11);
		const group = newGroup(members);
		let most = 0;
		for (const item of items) {
			advance(group, item);
			most = Math.max(most, encodeSlow(group, item.nodeId).length);
			expect(encodeFast(group, item.nodeId).length).toBeLessThanOrEqual(300);
		}
		expect(most).toBeLessThanOrEqual(4096);
	});

	test('slow bytes change only with the slow revision', () => {
		const { members, items } = streetLife(13);
		const group = newGroup(members);
		const known = new Map<number, { revision: number; bytes: string }>();
		for (const item of items) {
			advance(group, item);
			for (const { nodeId } of members) {
				const now = {
					revision: slowRevision(group, nodeId),
					bytes: encodeSlow(group, nodeId).join()
				};
				const before = known.get(nodeId);
				if (before?.revision === now.revision) expect(now.bytes).toBe(before.bytes);
				known.set(nodeId, now);
			}
		}
	});

	test('a foreign layout is told, not guessed at', () => {
		const group = newGroup([]);
		expect(group.nodes).toEqual([]);
		const { members } = streetLife(1);
		const bytes = new Uint8Array([250, 0, 0]);
		expect(() => restore(members, [bytes], [null])).toThrow(RangeError);
	});

	test('sorting by time and node is what an undisturbed run means', () => {
		const { items } = streetLife(3);
		expect(sorted(items)).toEqual(items);
	});
});
