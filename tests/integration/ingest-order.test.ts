import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { replayMarked } from '$lib/server/ingest/far-replay';
import { eventually } from '../support/ingest';
import { IngestRun } from '../support/ingest-run';
import { disturbed, inChunks, inTime, STAYS, type Delivery } from '../support/ingest-story';

const MIN = 60_000;
const run = new IngestRun();
const START_MS = Math.floor((Date.now() - 6 * 60 * MIN) / 1000) * 1000;

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

let undisturbed: string[][];

beforeAll(async () => {
	// Seven groups of three bays 2.5 m apart, 100 m from each other.
	await run.begin({ nodes: 21, pitchM: 2.5 });
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
	await deliver(0, inTime(START_MS));
	undisturbed = await histories(0);
});
afterAll(async () => await run.end());

describe('the same effective history, however it came', () => {
	test('the undisturbed run holds every stay of the story', () => {
		const arrivals = undisturbed.map((rows) => rows.filter((r) => r.startsWith('arrival')).length);
		expect(arrivals).toEqual(STAYS.map((stays) => stays.length));
	});

	test('rows up to ten minutes late and duplicates change nothing', async () => {
		await deliver(3, disturbed(inTime(START_MS), 10 * MIN, 7));
		await drained();
		expect(await histories(3)).toEqual(undisturbed);
		await feedMatches(3);
		expect(run.pipeline.status().replays).toBeGreaterThan(0);
	});

	test('rows hours late are put right in the background', async () => {
		await deliver(6, disturbed(inTime(START_MS), 200 * MIN, 11));
		await drained();
		expect(await histories(6)).toEqual(undisturbed);
		await feedMatches(6);
	});

	test('a node that comes with its whole backlog after the others', async () => {
		const all = inTime(START_MS);
		await deliver(9, [...all.filter(({ i }) => i !== 1), ...all.filter(({ i }) => i === 1)]);
		await drained();
		expect(await histories(9)).toEqual(undisturbed);
		await feedMatches(9);
	});

	test('one late row after another, each after the snapshot that the replay before it took', async () => {
		const held =
			(min: number) =>
			({ i, frame }: Delivery[number]) =>
				i === 0 && frame.t >= START_MS + min * MIN && frame.t < START_MS + (min + 1) * MIN;
		const all = inTime(START_MS);
		const [early, later] = [all.filter(held(21)), all.filter(held(26))];
		const rest = all.filter((one) => !early.includes(one) && !later.includes(one));
		const [a, b] = [24, 29].map((min) =>
			rest.findIndex(({ frame }) => frame.t >= START_MS + min * MIN)
		) as [number, number];
		// One after the other: what is in flight together goes in sorted.
		for (const part of [rest.slice(0, a), early, rest.slice(a, b), later, rest.slice(b)])
			await deliver(15, part);
		await drained();
		expect(await histories(15)).toEqual(undisturbed);
		await feedMatches(15);
	});

	test('backlogs of neighbours in long messages are merged: nothing is told that is taken back', async () => {
		await deliver(18, inChunks(START_MS));
		await run.pipeline.exclusive(async () => undefined);
		const bays = [18, 19, 20].map((k) => run.node(k).bayId);
		await eventually(
			async () => await run.rows('SELECT node_id FROM node_fast WHERE waiting_from_ms IS NOT NULL'),
			(waiting) => waiting.length === 0
		);
		await drained();
		expect(await histories(18)).toEqual(undisturbed);
		expect(
			await run.rows("SELECT bay_id, at_ms FROM event WHERE type = 'voided' AND bay_id IN (?)", [
				bays
			])
		).toEqual([]);
	});

	test('everything at once, backwards', async () => {
		await deliver(12, inTime(START_MS).reverse());
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
