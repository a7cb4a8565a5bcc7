import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { replayMarked } from '$lib/server/ingest/far-replay';
import type { ReadingFrame } from '$lib/wire/types';
import { noisy, QUIET, reading, TAKEN } from '../support/ingest';
import { IngestRun } from '../support/ingest-run';

const MIN = 60_000;
const run = new IngestRun();
const START_MS = Math.floor((Date.now() - 6 * 60 * MIN) / 1000) * 1000;

/** When each of three neighbouring bays is taken, minutes after the start: [from, to]. */
const STAYS = [
	[
		[22, 41],
		[60, 95],
		[130, 131.5],
		[200, 240]
	],
	[
		[25, 80],
		[100, 170]
	],
	[
		[30, 50],
		[132, 210]
	]
] as const;
const LENGTH_MIN = 260;

/** What node `i` sends: learning rows, then a reading a minute and a 2 Hz burst around each change. */
function story(i: number): ReadingFrame[] {
	const frames: ReadingFrame[] = [];
	const stays = STAYS[i]!;
	const taken = (min: number) => stays.some(([from, to]) => min >= from && min < to);
	let n = 0;
	const push = (atMs: number, rowsMs: number[]) => {
		const rows = rowsMs.map((dt) => {
			const min = (atMs + dt - START_MS) / MIN;
			n += 1;
			return [dt, noisy(taken(min) ? TAKEN : QUIET, n + i)] as const;
		});
		frames.push(reading({ seq: frames.length, t: atMs, rows }));
	};
	push(
		START_MS + 1_000 + i * 300,
		Array.from({ length: 60 }, (_, k) => k * 10_000)
	);
	const changes = stays.flat().map((min) => Math.round(min * MIN));
	for (let min = 12; min < LENGTH_MIN; min += 1) {
		const fromMs = min * MIN + i * 7_000;
		push(START_MS + fromMs, [0]);
		for (const change of changes.filter((c) => c >= fromMs && c < fromMs + MIN))
			push(
				START_MS + change + 200 + i * 30,
				Array.from({ length: 16 }, (_, k) => k * 500)
			);
	}
	return frames.sort((a, b) => a.t - b.t).map((frame, seq) => ({ ...frame, seq }));
}

type Delivery = { i: number; frame: ReadingFrame }[];
const inTime = (): Delivery =>
	[0, 1, 2]
		.flatMap((i) => story(i).map((frame) => ({ i, frame })))
		.sort((a, b) => a.frame.t - b.frame.t);

async function deliver(firstNode: number, delivery: Delivery): Promise<void> {
	// Several unanswered at once, as real nodes do; each node's own order is the delivery's.
	const open: Promise<void>[] = [];
	for (const { i, frame } of delivery) {
		open.push(run.send(run.node(firstNode + i), frame));
		if (open.length >= 20) await Promise.all(open.splice(0));
	}
	await Promise.all(open);
}

const relative = (rows: { type: string; state: string; atMs: number }[]) =>
	rows.map(({ type, state, atMs }) => `${type} ${state} ${atMs - START_MS}`);

async function histories(firstNode: number): Promise<string[][]> {
	const all: string[][] = [];
	for (const i of [0, 1, 2]) all.push(relative(await run.history(run.node(firstNode + i).bayId)));
	return all;
}

/** Swaps stretches of the delivery so that rows come up to `mostMs` late (seeded, the same every time). */
function disturbed(delivery: Delivery, mostMs: number, seed: number): Delivery {
	let state = seed;
	const random = () => (state = (state * 48_271) % 2_147_483_647) / 2_147_483_647;
	return delivery
		.map((one) => ({ one, key: one.frame.t + (random() < 0.1 ? random() * mostMs : 0) }))
		.sort((a, b) => a.key - b.key)
		.flatMap(({ one }) => (random() < 0.1 ? [one, one] : [one]));
}

let undisturbed: string[][];

beforeAll(async () => {
	// Five groups of three bays 2.5 m apart, 100 m from each other.
	await run.begin({ nodes: 15, pitchM: 2.5 });
	for (const [k, node] of run.site.nodes.entries())
		await run.rows('UPDATE node SET east_m = ? WHERE id = ?', [
			Math.floor(k / 3) * 100 + (k % 3) * 2.5,
			node.id
		]);
	await run.acts(
		run.site.nodes
			.map((node) => [node, 'place', { preCommissioned: true }, START_MS] as const)
			.map((a) => [...a])
	);
	await deliver(0, inTime());
	undisturbed = await histories(0);
});
afterAll(async () => await run.end());

describe('the same effective history, however it came', () => {
	test('the undisturbed run holds every stay of the story', () => {
		const arrivals = undisturbed.map((rows) => rows.filter((r) => r.startsWith('arrival')).length);
		expect(arrivals).toEqual(STAYS.map((stays) => stays.length));
	});

	test('rows up to ten minutes late and duplicates change nothing', async () => {
		await deliver(3, disturbed(inTime(), 10 * MIN, 7));
		await drained();
		expect(await histories(3)).toEqual(undisturbed);
		await feedMatches(3);
		expect(run.pipeline.status().replays).toBeGreaterThan(0);
	});

	test('rows hours late are put right in the background', async () => {
		await deliver(6, disturbed(inTime(), 200 * MIN, 11));
		await drained();
		expect(await histories(6)).toEqual(undisturbed);
		await feedMatches(6);
	});

	test('a node that comes with its whole backlog after the others', async () => {
		const all = inTime();
		await deliver(9, [...all.filter(({ i }) => i !== 1), ...all.filter(({ i }) => i === 1)]);
		await drained();
		expect(await histories(9)).toEqual(undisturbed);
		await feedMatches(9);
	});

	test('everything at once, backwards', async () => {
		await deliver(12, inTime().reverse());
		await drained();
		expect(await histories(12)).toEqual(undisturbed);
		await feedMatches(12);
	});
});

/** Until nothing waits and no hour is marked. */
async function drained(): Promise<void> {
	await run.pipeline.exclusive(async () => undefined);
	while (await replayMarked(run.pipeline));
}

/** What the feed says now, without what it took back, is history (times within a minute are told once). */
async function feedMatches(firstNode: number): Promise<void> {
	for (const i of [0, 1, 2]) {
		const { bayId } = run.node(firstNode + i);
		const [feed, history] = [await run.feed(bayId), await run.history(bayId)];
		expect(feed.map(({ type, state }) => `${type} ${state}`)).toEqual(
			history.map(({ type, state }) => `${type} ${state}`)
		);
		feed.forEach(({ atMs }, k) => expect(Math.abs(atMs - history[k]!.atMs)).toBeLessThan(MIN));
	}
}
