import { createSecret } from '$lib/server/secret';
import { LINK_SECRET } from '../support/broker';
import { startDatabase, type TestDatabase } from '../support/database';
import {
	act,
	eventually,
	makeSite,
	noisy,
	openStore,
	QUIET,
	reading,
	sealed,
	SECRET,
	select,
	type TestSite
} from '../support/ingest';
import { MqttNode } from '../support/mqtt-node';
import { run, type Running } from '../support/processes';

export interface BenchSite {
	database: TestDatabase;
	store: ReturnType<typeof openStore>;
	port: number;
	app: Running<unknown>;
	site: TestSite;
	/** Event time from which each node has nothing yet. */
	fromMs: number;
	close(): Promise<void>;
}

const MIN = 60_000;

/** Database, broker and app as processes of their own, and nodes in service that have learned their field. */
export async function startBenchSite(nodes: number, pitchM: number): Promise<BenchSite> {
	const database = await startDatabase();
	const store = openStore(database.url);
	const site = await makeSite(store, createSecret(SECRET), { nodes, pitchM, prefix: 'BENCH' });
	const env = {
		MQTT_PORT: '0',
		MQTT_RATE: '1000000',
		LODEKEEP_LINK_SECRET: LINK_SECRET,
		DATABASE_URL: database.url
	};
	const broker = await run<{ port: number }>('src/launch/broker.ts', env);
	const { port } = broker.ready;
	const fromMs = Date.now() - 120 * MIN;
	for (const node of site.nodes)
		await act(store, site.siteId, node, 'place', { preCommissioned: true }, fromMs);
	const app = await run(process.env['BENCH_APP'] ?? 'tests/support/ingest-app.ts', {
		...env,
		MQTT_PORT: String(port)
	});
	await eventually(
		async () => await select(store.pool, 'SELECT id FROM act WHERE taken_at_ms IS NULL LIMIT 1'),
		(rows) => rows.length === 0,
		120_000
	);
	await teach(store, site, port, fromMs);
	return {
		database,
		store,
		port,
		app,
		site,
		fromMs: fromMs + 12 * MIN,
		close: async () => {
			await app.kill('SIGTERM');
			await broker.kill('SIGTERM');
			await store.close();
			await database.close();
		}
	};
}

/** Each node sends ten quiet minutes in one message: its quiet field is learned and accepted by rule. */
async function teach(
	store: ReturnType<typeof openStore>,
	site: TestSite,
	port: number,
	fromMs: number
): Promise<void> {
	for (const node of site.nodes) {
		const client = await MqttNode.connect(port, node.key);
		const rows = Array.from({ length: 60 }, (_, i) => [i * 10_000, noisy(QUIET, i)] as const);
		const frame = reading({ seq: 0, t: fromMs + MIN, rows });
		await client.client.publishAsync(
			`lodekeep/1/${node.serial}/up/reading`,
			Buffer.from(sealed(node, frame)),
			{ qos: 1 }
		);
		await client.end();
	}
	await eventually(
		async () =>
			await select<{ n: number }>(
				store.pool,
				"SELECT COUNT(*) AS n FROM bay_state WHERE state = 'vacant'"
			),
		([row]) => row?.n === site.nodes.length,
		30_000
	);
}
