import { afterAll, beforeAll, expect, test } from 'vitest';
import { createSecret } from '$lib/server/secret';
import { connect, type Store } from '$lib/server/store/connect';
import { setHabit } from '../../simulator/node';
import { startApp, TEST_SECRET, type TestApp } from '../support/app';
import { Bench, LINK_SECRET } from '../support/broker';
import { startDatabase } from '../support/database';
import { act, eventually, makeSite, type TestSite } from '../support/ingest';
import { MqttNode } from '../support/mqtt-node';
import { seed, type Seeded } from '../support/seed';
import { Street } from '../support/street';

const MIN = 60_000;
const startMs = Date.now() - 240 * MIN;
const bench = new Bench();
let store: Store;
let seeded: Seeded;
let site: TestSite;
let app: TestApp;
let street: Street;
let start: () => Promise<TestApp>;

const rows = async <T>(text: string, values: unknown[] = []): Promise<T[]> =>
	(await store.pool.query(text, values))[0] as T[];
const stateIs = async (id: number, wanted: string) =>
	await eventually(
		async () => await rows<{ state: string }>('SELECT state FROM refresh WHERE id = ?', [id]),
		([row]) => row?.state === wanted,
		30_000
	);

beforeAll(async () => {
	const database = bench.ending(await startDatabase(), async (d) => await d.close());
	store = bench.ending(connect(database.url), async (s) => await s.close());
	seeded = await seed(store.db);
	site = await makeSite(store, createSecret(TEST_SECRET), { nodes: 1 });
	const broker = await bench.broker();
	const env = { MQTT_URL: '', MQTT_PORT: String(broker.port), LODEKEEP_LINK_SECRET: LINK_SECRET };
	start = async () => await startApp({ databaseUrl: database.url, env });
	app = await start();
	const node = site.nodes[0]!;
	const client = bench.ending(
		await MqttNode.connect(broker.port, node.key),
		async (c) => await c.end()
	);
	await client.listen();
	street = new Street(node, [], startMs, {
		client: async () => await Promise.resolve(client),
		sendCommands: async () => await Promise.resolve(),
		waitMs: 20_000
	});
	await street.boot();
	await act(store, site.siteId, node, 'place', { preCommissioned: true }, startMs + 1_000);
	await eventually(
		async () => await rows('SELECT id FROM act WHERE taken_at_ms IS NULL'),
		(left) => left.length === 0,
		15_000
	);
	await street.until(startMs + 8 * MIN);
	setHabit(street.state, { periodS: 60, deltaMg: 8 }, street.atMs);
	await street.until(Date.now() - 2_000);
}, 120_000);
afterAll(async () => {
	await app.kill();
	await bench.end();
});

test('kill -9 of the app with a pair command out: the answer that comes meanwhile counts, and one pulse proves it', async () => {
	const node = site.nodes[0]!;
	const admin = await app.signIn(seeded.emails.admin);
	const asked = await admin(`/api/v1/nodes/${node.serial}/refresh`, { method: 'POST', body: {} });
	const { id } = asked.json() as { id: number };
	await rows(
		`INSERT INTO refresh_settings (site_id, own_approval, most_at_once, hold_off_h, schedule_on, schedule_reasons,
			most_a_night, changed_by, changed_at_ms) VALUES (?, 1, 3, 12, 0, '', 5, 'person:1', 0)`,
		[site.siteId]
	);
	await street.ignore();
	const approve = { method: 'POST', body: { deed: 'approve', anyHour: true } };
	const approved = await admin(`/api/desk/sites/osier-yard/refreshes/${id}/decide`, approve);
	expect(approved.status).toBe(200);
	await stateIs(id, 'sent');
	// The node has it, or gets it from the broker; the app is gone before it hears of that.
	await eventually(
		async () =>
			await rows<{ sends: number }>('SELECT sends FROM command WHERE cause = ?', [`refresh:${id}`]),
		([row]) => (row?.sends ?? 0) > 0,
		15_000
	);
	await app.kill();
	await street.until(street.atMs);
	const { pulses } = street.state;
	// The broker takes the answer in and gives its PUBACK only once the app has it stored.
	const obeyed = street.obey();
	app = await start();
	await obeyed;
	await stateIs(id, 'obeyed');
	setHabit(street.state, { periodS: 0.5, deltaMg: 8 }, street.atMs);
	await street.until(street.atMs + 50_000);
	await stateIs(id, 'proved');
	// SET, RESET, SET of one pair: nothing was fired twice.
	expect(street.state.pulses - pulses).toBe(3);
	expect(
		await rows('SELECT id FROM command WHERE cause = ? AND verb = ?', [`refresh:${id}`, 'pair'])
	).toHaveLength(1);
}, 120_000);
