import { afterAll, beforeAll, expect, test } from 'vitest';
import * as readings from '$lib/server/store/queries/readings';
import { reading, type TestNode } from '../support/ingest';
import { IngestRun } from '../support/ingest-run';

const HOUR = 3_600_000;
const run = new IngestRun();
const FROM_MS = Math.floor(Date.now() / HOUR) * HOUR - 10 * HOUR;
let node: TestNode;

beforeAll(async () => {
	await run.begin({ nodes: 1 });
	node = run.node(0);
	// Four hours, a row a minute; x counts the minutes, z is constant. Hour 2 comes last, so it is late.
	for (const hour of [0, 1, 3, 2])
		await run.send(
			node,
			reading({
				seq: hour,
				t: FROM_MS + hour * HOUR,
				tempDc: 100 + hour,
				rows: Array.from({ length: 60 }, (_, i) => [i * 60_000, [hour * 60 + i, -i, 500]] as const)
			})
		);
});
afterAll(async () => await run.end());

test('buckets of minutes come from the rows: least, greatest and mean of each', async () => {
	const list = await readings.buckets(run.store.pool, node.id, FROM_MS, FROM_MS + HOUR, 6);
	expect(list.map(({ n }) => n)).toEqual([10, 10, 10, 10, 10, 10]);
	// Minutes 10 to 19 by hand: mean 14.5 of x, -14.5 of y.
	expect(list[1]).toMatchObject({
		mean: [14.5, -14.5, 500],
		min: [10, -19, 500],
		max: [19, -10, 500]
	});
});

test('buckets of hours come from the rollup, late rows included, and say the same as the rows', async () => {
	const list = await readings.buckets(run.store.pool, node.id, FROM_MS, FROM_MS + 4 * HOUR, 4);
	expect(list.map(({ n }) => n)).toEqual([60, 60, 60, 60]);
	// Hour 2 holds 120 … 179: mean 149.5.
	expect(list[2]).toMatchObject({
		mean: [149.5, -29.5, 500],
		min: [120, -59, 500],
		max: [179, 0, 500]
	});
	// The temperature of a message holds for rows within 5 min of its last.
	expect(list[2]?.tempDc).toBe(102);
	expect(list[2]?.batteryMinMv).toBe(3_600);
});

test('an empty stretch is a gap, not a zero', async () => {
	const list = await readings.buckets(
		run.store.pool,
		node.id,
		FROM_MS - 2 * HOUR,
		FROM_MS + 2 * HOUR,
		4
	);
	expect(list.map(({ fromMs }) => fromMs)).toEqual([FROM_MS, FROM_MS + HOUR]);
});

test('raw rows page by cursor without loss or repeat', async () => {
	const seen: number[] = [];
	let cursor: readings.RawCursor | null = null;
	do {
		const page: Awaited<ReturnType<typeof readings.raw>> = await readings.raw(
			run.store.pool,
			node.id,
			{ fromMs: FROM_MS, toMs: FROM_MS + 4 * HOUR },
			cursor,
			37
		);
		seen.push(...page.rows.map(({ x }) => x));
		cursor = page.next;
	} while (cursor !== null);
	expect(seen).toEqual(Array.from({ length: 240 }, (_, i) => i));
});
