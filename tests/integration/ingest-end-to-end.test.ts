import { afterAll, beforeAll, expect, test } from 'vitest';
import type { Pipeline } from '$lib/server/ingest/pipeline';
import { createSecret } from '$lib/server/secret';
import type { Store } from '$lib/server/store/connect';
import * as changes from '$lib/server/store/queries/changes';
import { Bench } from '../support/broker';
import { startDatabase, type TestDatabase } from '../support/database';
import {
	act,
	eventually,
	makeSite,
	noisy,
	openStore,
	QUIET,
	reading,
	runPipeline,
	sealed,
	SECRET,
	select,
	TAKEN,
	type TestSite
} from '../support/ingest';
import { MqttNode } from '../support/mqtt-node';

const MIN = 60_000;
const bench = new Bench();
let database: TestDatabase;
let store: Store;
let site: TestSite;
let pipeline: Pipeline;
let port: number;

beforeAll(async () => {
	database = bench.ending(await startDatabase(), async (d) => await d.close());
	store = bench.ending(openStore(database.url), async (s) => await s.close());
	site = await makeSite(store, createSecret(SECRET), { nodes: 2 });
	const broker = await bench.broker();
	port = broker.port;
	const subscriber = await bench.subscriber(
		port,
		site.nodes.map(({ key }) => key)
	);
	pipeline = bench.ending(await runPipeline(store, subscriber), async (p) => await p.close());
});
afterAll(async () => await bench.end());

test('a vehicle over a learned bay becomes a stored arrival in the feed', async () => {
	const [node] = site.nodes;
	const startMs = Date.now() - 30 * MIN;
	await act(store, site.siteId, node!, 'place', { preCommissioned: true }, startMs);
	pipeline.nudge();
	const placed = await eventually(
		async () =>
			await select<{ bayId: number | null }>(
				store.pool,
				'SELECT bay_id AS bayId FROM node WHERE id = ?',
				[node!.id]
			),
		([row]) => row?.bayId !== null
	);
	expect(placed[0]?.bayId).toBe(node!.bayId);

	const mqtt = bench.ending(await MqttNode.connect(port, node!.key), async (m) => await m.end());
	let seq = 0;
	const send = async (fromMs: number, counts: typeof QUIET, rows: number) => {
		const frame = reading({
			seq: seq++,
			t: fromMs,
			rows: Array.from({ length: rows }, (_, i) => [i * 10_000, noisy(counts, i)] as const)
		});
		await mqtt.client.publishAsync(
			`lodekeep/1/${node!.serial}/up/reading`,
			Buffer.from(sealed(node!, frame)),
			{ qos: 1 }
		);
	};
	await send(startMs + 1_000, QUIET, 60);
	await send(startMs + 11 * MIN, TAKEN, 30);
	const events = await eventually(
		async () =>
			await select<{ type: string; state: string; atMs: number; id: number }>(
				store.pool,
				'SELECT id, type, state, at_ms AS atMs FROM event WHERE bay_id = ? ORDER BY id',
				[node!.bayId]
			),
		(rows) => rows.some(({ type }) => type === 'arrival')
	);
	expect(events.map(({ type, state }) => `${type} ${state}`)).toEqual([
		'known vacant',
		'arrival occupied'
	]);
	const rows = await select<{ n: number }>(
		store.pool,
		'SELECT COUNT(*) AS n FROM reading WHERE node_id = ?',
		[node!.id]
	);
	expect(rows[0]?.n).toBe(90);
	const log = await changes.after(store.pool, site.siteId, 0, 100);
	expect(log.ok && log.items.map(({ id }) => id)).toEqual(
		Array.from({ length: log.ok ? log.items.length : 0 }, (_, i) => i + 1)
	);
	const shown = await select<{ state: string; condition: string }>(
		store.pool,
		'SELECT state, `condition` FROM bay_state WHERE bay_id = ?',
		[node!.bayId]
	);
	expect(shown).toEqual([{ state: 'occupied', condition: 'in_service' }]);
});
