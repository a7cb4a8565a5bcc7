import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { createSecret } from '$lib/server/secret';
import type { Store } from '$lib/server/store/connect';
import { LINK_SECRET } from '../support/broker';
import { startDatabase, type TestDatabase } from '../support/database';
import {
	act,
	eventually,
	makeSite,
	openStore,
	sealed,
	SECRET,
	select,
	type TestNode,
	type TestSite
} from '../support/ingest';
import { inTime, STAYS, type Delivery } from '../support/ingest-story';
import { MqttNode } from '../support/mqtt-node';
import { run, type Running } from '../support/processes';

const MIN = 60_000;
const START_MS = Math.floor((Date.now() - 6 * 60 * MIN) / 1000) * 1000;
/** Long enough that several batches are under way at any moment. */
const IN_FLIGHT = 30;

let database: TestDatabase;
let store: Store;
let site: TestSite;
let broker: Running<{ port: number }>;
let app: Running<unknown>;
let port: number;

const env = () => ({
	MQTT_PORT: String(port),
	MQTT_RATE: '100000',
	LODEKEEP_LINK_SECRET: LINK_SECRET,
	DATABASE_URL: database.url,
	EVERY_MS: '300'
});
const startBroker = async () => await run<{ port: number }>('src/launch/broker.ts', env());
const startApp = async () => await run('tests/support/ingest-app.ts', env());

beforeAll(async () => {
	database = await startDatabase();
	store = openStore(database.url);
	site = await makeSite(store, createSecret(SECRET), { nodes: 12 });
	for (const [k, node] of site.nodes.entries())
		await store.pool.query('UPDATE node SET east_m = ? WHERE id = ?', [
			Math.floor(k / 3) * 100 + (k % 3) * 2.5,
			node.id
		]);
	for (const node of site.nodes)
		await act(store, site.siteId, node, 'place', { preCommissioned: true }, START_MS);
	port = 0;
	broker = await startBroker();
	port = broker.ready.port;
	app = await startApp();
	await eventually(
		async () => await select(store.pool, 'SELECT id FROM act WHERE taken_at_ms IS NULL'),
		(rows) => rows.length === 0
	);
	await deliver(0);
	expect(
		(await histories(0)).map((rows) => rows.filter((r) => r.startsWith('arrival')).length)
	).toEqual(STAYS.map((stays) => stays.length));
}, 180_000);
afterAll(async () => {
	await app?.kill('SIGKILL');
	await broker?.kill('SIGKILL');
	await store?.close();
	await database?.close();
});

/** Sends the story from three nodes, `fault` meanwhile; resolves when every message has its PUBACK. */
async function deliver(firstNode: number, fault: () => Promise<void> = async () => undefined) {
	const clients: MqttNode[] = [];
	for (const i of [0, 1, 2]) clients.push(await MqttNode.connect(port, nodeAt(firstNode + i).key));
	const story: Delivery = inTime(START_MS);
	const faulting = fault();
	const open = new Set<Promise<void>>();
	for (const { i, frame } of story) {
		const node = nodeAt(firstNode + i);
		const sending = clients[i]!.client.publishAsync(
			`lodekeep/1/${node.serial}/up/reading`,
			Buffer.from(sealed(node, frame)),
			{
				qos: 1
			}
		).then(() => undefined);
		open.add(sending);
		void sending.finally(() => open.delete(sending));
		if (open.size >= IN_FLIGHT) await Promise.race(open);
	}
	await Promise.all(open);
	await faulting;
	for (const client of clients) await client.end();
	const [left] = await eventually(
		async () =>
			await select<{ n: number }>(
				store.pool,
				'SELECT (SELECT COUNT(*) FROM replay_hour) + (SELECT COUNT(*) FROM node_fast WHERE waiting_from_ms IS NOT NULL) AS n'
			),
		([row]) => row?.n === 0,
		40_000
	);
	expect(left?.n).toBe(0);
}

function nodeAt(i: number): TestNode {
	const node = site.nodes[i];
	if (node === undefined) throw new RangeError(`no node ${i}`);
	return node;
}

async function histories(firstNode: number): Promise<string[][]> {
	const all: string[][] = [];
	for (const i of [0, 1, 2]) {
		const rows = await select<{ type: string; state: string; atMs: number }>(
			store.pool,
			'SELECT type, state, at_ms AS atMs FROM history WHERE bay_id = ? AND voided_at_ms IS NULL ORDER BY at_ms, id',
			[nodeAt(firstNode + i).bayId]
		);
		all.push(rows.map(({ type, state, atMs }) => `${type} ${state} ${atMs - START_MS}`));
	}
	return all;
}

async function expectSame(firstNode: number): Promise<void> {
	expect(await histories(firstNode)).toEqual(await histories(0));
	const ids = [0, 1, 2].map((i) => nodeAt(firstNode + i).id);
	const [rows] = await select<{ n: number; d: number }>(
		store.pool,
		'SELECT COUNT(*) AS n, COUNT(DISTINCT node_id, boot, seq, `row`) AS d FROM reading WHERE node_id IN (?)',
		[ids]
	);
	const sent = inTime(START_MS).reduce((sum, { frame }) => sum + frame.rows.length, 0);
	expect(rows).toEqual({ n: sent, d: sent });
	await expectGapless();
	await expectRollups(ids);
}

/** The change log has no hole and no event twice. */
async function expectGapless(): Promise<void> {
	const [log] = await select<{ n: number; last: number; top: number }>(
		store.pool,
		'SELECT COUNT(*) AS n, MAX(c.id) AS last, MAX(s.last_change) AS top FROM `change` c JOIN site s ON s.id = c.site_id'
	);
	expect(log?.n).toBe(log?.last);
	expect(log?.top).toBe(log?.last);
	const doubles = await select(
		store.pool,
		`SELECT e.bay_id, e.type, e.at_ms FROM event e WHERE e.type <> 'voided'
		 AND NOT EXISTS (SELECT 1 FROM event v WHERE v.site_id = e.site_id AND v.voids = e.id)
		 GROUP BY e.bay_id, e.type, e.at_ms HAVING COUNT(*) > 1`
	);
	expect(doubles).toEqual([]);
}

/** Rollups count each reading once. */
async function expectRollups(ids: number[]): Promise<void> {
	const differing = await select(
		store.pool,
		`SELECT h.node_id, h.hour_ms, h.n, r.n AS rn FROM reading_hour h JOIN (
			SELECT node_id, FLOOR(at_ms / 3600000) * 3600000 AS hour_ms, COUNT(*) AS n, SUM(z) AS zs FROM reading GROUP BY 1, 2
		 ) r ON r.node_id = h.node_id AND r.hour_ms = h.hour_ms
		 WHERE h.node_id IN (?) AND (h.n <> r.n OR h.z_sum <> r.zs)`,
		[ids]
	);
	expect(differing).toEqual([]);
}

const pause = async (ms: number) => await new Promise((resolve) => setTimeout(resolve, ms));

describe('killed in mid-batch, the same effective history as an undisturbed run', () => {
	test('kill -9 of the app, three times', async () => {
		await deliver(3, async () => {
			for (let k = 0; k < 3; k += 1) {
				await pause(400 + 130 * k);
				await app.kill('SIGKILL');
				app = await startApp();
			}
		});
		await expectSame(3);
	});

	test('kill -9 of the broker, three times', async () => {
		await deliver(6, async () => {
			for (let k = 0; k < 3; k += 1) {
				await pause(400 + 130 * k);
				await broker.kill('SIGKILL');
				broker = await startBroker();
			}
		});
		await expectSame(6);
	});

	test('kill -9 of MariaDB, three times', async () => {
		await deliver(9, async () => {
			for (let k = 0; k < 3; k += 1) {
				await pause(500 + 130 * k);
				await database.kill();
				await database.start();
			}
		});
		await expectSame(9);
	});
});
