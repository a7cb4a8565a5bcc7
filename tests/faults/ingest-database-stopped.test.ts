import { afterAll, beforeAll, expect, test } from 'vitest';
import { eventually, QUIET, reading } from '../support/ingest';
import { IngestRun } from '../support/ingest-run';

/** The long form is the issue's own figure; the short one has the same proportions. */
const LONG = process.env['LODEKEEP_LONG'] === '1';
const STOPPED_MS = LONG ? 60_000 : 9_000;
const KEEPALIVE_S = LONG ? 5 : 1;
const NODES = 20;
const run = new IngestRun();

beforeAll(async () => {
	await run.begin({ nodes: NODES });
});
afterAll(async () => await run.end());

const pause = async (ms: number) => await new Promise((resolve) => setTimeout(resolve, ms));

test(
	`database stopped ${STOPPED_MS / 1000} s with keepalive ${KEEPALIVE_S} s: no node is cut, nothing is lost`,
	async () => {
		const clients = await Promise.all(
			run.site.nodes.map(async (node) => await run.client(node, { keepalive: KEEPALIVE_S }))
		);
		let seq = 0;
		const sent: Promise<void>[] = [];
		const sendAll = () => {
			for (const node of run.site.nodes)
				sent.push(run.send(node, reading({ seq, t: Date.now(), rows: [[0, QUIET]] })));
			seq += 1;
		};
		sendAll();
		await Promise.all(sent);
		await run.database.stop();
		const endMs = Date.now() + STOPPED_MS;
		while (Date.now() < endMs) {
			sendAll();
			await pause(250);
		}
		expect(run.pipeline.status().hold).toBe('database');
		await run.database.start();
		await Promise.all(sent);
		expect(clients.map((client) => client.closes)).toEqual(clients.map(() => 0));
		const rows = await eventually(
			async () => await run.rows<{ n: number }>('SELECT COUNT(*) AS n FROM reading'),
			([row]) => row?.n === seq * NODES
		);
		expect(rows[0]?.n).toBe(seq * NODES);
		expect(run.pipeline.status().hold).toBeNull();
	},
	STOPPED_MS + 120_000
);
