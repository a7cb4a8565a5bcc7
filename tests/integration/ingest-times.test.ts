import { afterAll, beforeAll, beforeEach, expect, test } from 'vitest';
import { noisy, QUIET, reading, type TestNode } from '../support/ingest';
import { IngestRun } from '../support/ingest-run';

const MIN = 60_000;
const HOUR = 60 * MIN;
const DAY = 24 * HOUR;
const run = new IngestRun();
let next = 0;
let node: TestNode;

beforeAll(async () => {
	await run.begin({ nodes: 16 });
});
afterAll(async () => await run.end());
beforeEach(() => (node = run.node(next++)));

interface Stored {
	atMs: number;
	boot: number;
	seq: number;
	row: number;
	flags: number;
}
const stored = async (of = node): Promise<Stored[]> =>
	await run.rows(
		'SELECT at_ms AS atMs, boot, seq, `row`, flags FROM reading WHERE node_id = ? ORDER BY boot, seq, `row`',
		[of.id]
	);
const marks = async (of = node): Promise<number> =>
	(await run.rows<{ marks: number }>('SELECT marks FROM node_fast WHERE node_id = ?', [of.id]))[0]
		?.marks ?? 0;
const duplicates = async (): Promise<number> =>
	(
		await run.rows<{ n: number }>(
			'SELECT SUM(duplicates) + 0e0 AS n FROM node_count WHERE node_id = ?',
			[node.id]
		)
	)[0]?.n ?? 0;

const SHIFTED = 2;
const CLOCKLESS = 4;
const UNMOVING = 16;
const CLOCK_OFF = 1;

test('the same boot and seq again is dropped silently and counted', async () => {
	const frame = reading({ seq: 0, t: Date.now() - 1_000, rows: [[0, QUIET]] });
	await run.send(node, frame);
	await run.send(node, frame);
	expect(await stored()).toHaveLength(1);
	expect(await duplicates()).toBe(1);
});

test('a clockless message again keeps the time it was first given', async () => {
	const frame = reading({
		seq: 0,
		t: 0,
		rows: [
			[0, QUIET],
			[5_000, QUIET]
		]
	});
	const beforeMs = Date.now();
	await run.send(node, frame);
	const first = await stored();
	await new Promise((resolve) => setTimeout(resolve, 60));
	await run.send(node, frame);
	expect(await stored()).toEqual(first);
	expect(first[1]!.atMs).toBeGreaterThanOrEqual(beforeMs);
	expect(first[1]!.atMs).toBeLessThanOrEqual(Date.now());
	expect(first[1]!.atMs - first[0]!.atMs).toBe(5_000);
	expect(first.map(({ flags }) => flags)).toEqual([CLOCKLESS, CLOCKLESS]);
	expect((await marks()) & CLOCK_OFF).toBe(0);
});

test('a duplicate is known after the memory of its node was dropped', async () => {
	const frame = reading({ seq: 63, t: Date.now() - 1_000, rows: [[0, QUIET]] });
	await run.send(node, frame);
	run.pipeline.room.seen.forget(node.id);
	await run.send(node, frame);
	await run.send(node, { ...frame, seq: 31 });
	await run.send(node, { ...frame, seq: 32 });
	expect((await stored()).map(({ seq }) => seq)).toEqual([31, 32, 63]);
	expect(await duplicates()).toBe(1);
});

test('a clock before 2020 puts the last row at arrival and marks the node clock off', async () => {
	await run.send(
		node,
		reading({
			seq: 0,
			t: Date.UTC(2019, 11, 31),
			rows: [
				[0, QUIET],
				[9_000, QUIET]
			]
		})
	);
	const rows = await stored();
	expect(Math.abs(rows[1]!.atMs - Date.now())).toBeLessThan(5_000);
	expect(rows[0]!.flags).toBe(SHIFTED);
	expect((await marks()) & CLOCK_OFF).toBe(CLOCK_OFF);
});

test('a last row 59 s ahead stays where it is, one 61 s ahead is shifted as a whole', async () => {
	const t = Date.now();
	await run.send(node, reading({ seq: 0, t: t + 59_000, rows: [[0, QUIET]] }));
	expect((await stored())[0]).toMatchObject({ atMs: t + 59_000, flags: 0 });
	await run.send(
		node,
		reading({
			seq: 1,
			t: t + 50_000,
			rows: [
				[0, QUIET],
				[20_000, QUIET]
			]
		})
	);
	const [, first, last] = await stored();
	expect(last!.atMs).toBeLessThanOrEqual(Date.now());
	expect(last!.atMs - first!.atMs).toBe(20_000);
	expect((await marks()) & CLOCK_OFF).toBe(CLOCK_OFF);
});

test('a clock an hour ahead that tells when it sent is put right by its least skew', async () => {
	const t = Date.now();
	const ahead = (atMs: number, seq: number, sentMs: number) =>
		reading({ seq, t: atMs + HOUR, sentMs: sentMs + HOUR, rows: [[0, QUIET]] });
	await run.send(node, ahead(t - 10_000, 0, t));
	// First sent ten minutes ago and repeated now: its own difference is larger, the least one counts.
	await run.send(node, ahead(t - 20 * MIN, 1, t - 10 * MIN));
	const rows = await stored();
	expect(Math.abs(rows[0]!.atMs - (t - 10_000))).toBeLessThan(2_000);
	expect(Math.abs(rows[1]!.atMs - (t - 20 * MIN))).toBeLessThan(2_000);
	expect(rows.map(({ flags }) => flags)).toEqual([SHIFTED, SHIFTED]);
	expect((await marks()) & CLOCK_OFF).toBe(CLOCK_OFF);
});

test('a clock 59 s off is left alone and not marked', async () => {
	const t = Date.now() - 59_000;
	await run.send(node, reading({ seq: 0, t, sentMs: Date.now() - 59_000, rows: [[0, QUIET]] }));
	expect((await stored())[0]).toMatchObject({ atMs: t, flags: 0 });
	expect((await marks()) & CLOCK_OFF).toBe(0);
});

test('the least skew outlives a restart of the pipeline', async () => {
	const t = Date.now();
	await run.send(node, reading({ seq: 0, t: t + HOUR, sentMs: t + HOUR, rows: [[0, QUIET]] }));
	await run.pipeline.exclusive(async () => {
		await run.pipeline.room.registry.loadLives(run.store.pool, [node.id]);
	});
	const least = run.pipeline.room.registry.byId(node.id)?.live.skew.least(Date.now()) ?? 0;
	expect(Math.abs(least + HOUR)).toBeLessThan(2_000);
});

test('a row older than 14 days is stored and moves no state', async () => {
	await place(node, Date.now() - 20 * DAY);
	await run.send(node, reading({ seq: 0, t: Date.now() - 15 * DAY, rows: [[0, QUIET]] }));
	expect((await stored())[0]!.flags).toBe(UNMOVING);
	expect(run.pipeline.viewOf(node.id)?.fieldMg ?? null).toBeNull();
});

test('a lower boot not yet seen is late and taken', async () => {
	const t = Date.now() - 10 * MIN;
	await run.send(node, reading({ boot: 5, seq: 0, t, rows: [[0, QUIET]] }));
	await run.send(node, reading({ boot: 4, seq: 900, t: t - 5 * MIN, rows: [[0, QUIET]] }));
	expect((await stored()).map(({ boot, flags }) => [boot, flags])).toEqual([
		[4, 0],
		[5, 0]
	]);
	const [row] = await run.rows('SELECT heard_boot AS boot FROM node_fast WHERE node_id = ?', [
		node.id
	]);
	expect(row).toEqual({ boot: 5 });
});

test('a lower boot without a clock is stored and moves nothing', async () => {
	await run.send(node, reading({ boot: 5, seq: 0, t: Date.now(), rows: [[0, QUIET]] }));
	await run.send(node, reading({ boot: 4, seq: 900, t: 0, rows: [[0, QUIET]] }));
	expect((await stored()).map(({ boot, flags }) => [boot, flags])).toEqual([
		[4, CLOCKLESS | UNMOVING],
		[5, 0]
	]);
});

test('a boot counter that started anew, once accepted, counts as newer', async () => {
	const t = Date.now() - 30 * MIN;
	await run.send(node, reading({ boot: 40, seq: 0, t, rows: [[0, QUIET]] }));
	await run.send(node, reading({ boot: 0, seq: 0, t: t + MIN, rows: [[0, QUIET]] }));
	expect(await run.acts([[node, 'accept_boot', { boot: 0 }, t + 2 * MIN]])).toEqual(['done']);
	// The number 0 is free again, and a clockless row of boot 0 is no longer a late one.
	await run.send(node, reading({ boot: 0, seq: 1, t: 0, rows: [[0, QUIET]] }));
	const rows = await stored();
	expect(rows.at(1)).toMatchObject({ boot: 0, seq: 1, flags: CLOCKLESS });
	expect(run.pipeline.room.registry.byId(node.id)?.live.heardBoot).toBe(0);
});

test('a reboot with a backlog: both boots are in, in their own order', async () => {
	const t = Date.now() - HOUR;
	await place(node, t - MIN);
	const rows = (k: number) =>
		Array.from({ length: 40 }, (_, i) => [i * 5_000, noisy(QUIET, i + k)] as const);
	await run.send(node, reading({ boot: 7, seq: 0, t, rows: rows(0) }));
	await run.send(node, reading({ boot: 8, seq: 0, t: t + 20 * MIN, rows: [[0, QUIET]] }));
	await run.send(node, reading({ boot: 7, seq: 1, t: t + 5 * MIN, rows: rows(1) }));
	expect(await stored()).toHaveLength(81);
	expect(run.pipeline.viewOf(node.id)?.state).toBe('vacant');
});

test('battery, temperature and the newest row by event time stand in node_fast', async () => {
	const t = Date.now() - 1_000;
	await run.send(node, {
		...reading({ seq: 0, t, rows: [[0, [1, 2, 3]]] }),
		batteryMv: 3_512,
		tempDc: -55
	});
	await run.send(node, reading({ seq: 1, t: t - MIN, rows: [[0, [7, 8, 9]]] }));
	const [row] = await run.rows(
		'SELECT last_at_ms AS atMs, x, y, z, temp_dc AS tempDc, battery_mv AS mv FROM node_fast WHERE node_id = ?',
		[node.id]
	);
	expect(row).toEqual({ atMs: t, x: 1, y: 2, z: 3, tempDc: -55, mv: 3_600 });
});

async function place(which: TestNode, atMs: number): Promise<void> {
	expect(await run.acts([[which, 'place', { preCommissioned: true }, atMs]])).toEqual(['done']);
}
