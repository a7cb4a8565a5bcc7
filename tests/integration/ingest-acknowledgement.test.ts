import { createConnection } from 'mysql2/promise';
import { afterAll, beforeAll, beforeEach, expect, test } from 'vitest';
import { createSecret } from '$lib/server/secret';
import { QUIET, reading, type TestNode } from '../support/ingest';
import { IngestRun } from '../support/ingest-run';

const run = new IngestRun();
let node: TestNode;
let next = 0;

beforeAll(async () => {
	await run.begin({ nodes: 8 });
});
afterAll(async () => await run.end());
beforeEach(() => (node = run.node(next++)));

const frame = (seq = 0) => reading({ seq, t: Date.now() - 1_000, rows: [[0, QUIET]] });
const count = async (): Promise<number> =>
	(
		await run.rows<{ n: number }>('SELECT COUNT(*) AS n FROM reading WHERE node_id = ?', [node.id])
	)[0]!.n;
const pause = async (ms: number) => await new Promise((resolve) => setTimeout(resolve, ms));

/** Whether a promise is settled by now. */
async function isSettled(promise: Promise<unknown>): Promise<boolean> {
	const open = Symbol('open');
	return (await Promise.race([promise, pause(0).then(() => open)])) !== open;
}

test('no PUBACK before the commit: while a batch cannot commit, none comes', async () => {
	const other = await createConnection({ uri: run.database.url });
	await other.query('START TRANSACTION');
	// The batch's fence waits for this lock, so the batch hangs inside its transaction.
	await other.query("SELECT * FROM lease WHERE name = 'pipeline' FOR UPDATE");
	const sent = run.send(node, frame());
	await pause(1_000);
	expect(await isSettled(sent)).toBe(false);
	expect(await count()).toBe(0);
	await other.query('ROLLBACK');
	await sent;
	expect(await count()).toBe(1);
	await other.end();
});

test('what has its PUBACK is visible to another connection at once', async () => {
	const other = await createConnection({ uri: run.database.url });
	for (let seq = 0; seq < 20; seq += 1) {
		await run.send(node, frame(seq));
		const [rows] = await other.query('SELECT seq FROM reading WHERE node_id = ? AND seq = ?', [
			node.id,
			seq
		]);
		expect(rows).toEqual([{ seq }]);
	}
	await other.end();
});

test('a deadlock retries the whole batch, and nothing is stored twice', async () => {
	await run.send(node, frame(0));
	const other = await createConnection({ uri: run.database.url });
	const before = run.pipeline.status().retries;
	await other.query('START TRANSACTION');
	// Many changed rows make the other transaction the heavier one, so the batch is the victim.
	await other.query(
		"INSERT INTO installation (name, value) SELECT CONCAT('x', seq), 'x' FROM seq_1_to_2000"
	);
	await other.query('UPDATE node_fast SET rssi_dbm = 1 WHERE node_id = ?', [node.id]);
	const sent = run.send(node, frame(1));
	await pause(300);
	// The batch waits for node_fast and holds the counters of the day: now each waits for the other.
	await other.query('UPDATE node_count SET messages = messages WHERE node_id = ?', [node.id]);
	await other.query('ROLLBACK');
	await sent;
	expect(run.pipeline.status().retries).toBeGreaterThan(before);
	expect(await count()).toBe(2);
	const [counted] = await run.rows<{ n: number }>(
		'SELECT messages AS n FROM node_count WHERE node_id = ?',
		[node.id]
	);
	expect(counted?.n).toBe(2);
	await other.end();
});

test('under 200 MB of disk acknowledgements are held and the status says so', async () => {
	run.mayStore = false;
	const sent = run.send(node, frame());
	await pause(600);
	expect(await isSettled(sent)).toBe(false);
	expect(run.pipeline.status()).toMatchObject({ hold: 'disk_full' });
	run.mayStore = true;
	await sent;
	expect(run.pipeline.status().hold).toBeNull();
	expect(await count()).toBe(1);
});

test('a key that will not open stops the batch unacknowledged, by name, until it opens', async () => {
	const [row] = await run.rows<{ sealed: Buffer }>(
		'SELECT key_sealed AS sealed FROM node WHERE id = ?',
		[node.id]
	);
	const foreign = createSecret('another secret altogether, of good length');
	const sealedElsewhere = foreign.seal('node key', node.id, node.key.key);
	await setKey(sealedElsewhere);
	const sent = run.send(node, frame());
	const innocent = run.send(run.node(7), frame());
	await pause(600);
	expect(await isSettled(sent)).toBe(false);
	expect(run.pipeline.status()).toMatchObject({ hold: 'wrong_secret', holdDetail: node.serial });
	expect(await run.rows('SELECT id FROM rejected WHERE node_id = ?', [node.id])).toEqual([]);
	await run.rows('UPDATE node SET key_sealed = ? WHERE id = ?', [row!.sealed, node.id]);
	await Promise.all([sent, innocent]);
	expect(await count()).toBe(1);
});

async function setKey(sealed: Buffer): Promise<void> {
	await run.rows('UPDATE node SET key_sealed = ? WHERE id = ?', [sealed, node.id]);
	const { registry } = run.pipeline.room;
	await registry.loadSome(run.store.pool, { ids: [node.id] }, Date.now());
}

test('a pipeline that loses its lease writes nothing more', async () => {
	await run.send(node, frame(0));
	await run.rows(
		"UPDATE lease SET holder = 'another copy', until_ms = until_ms + 60000 WHERE name = 'pipeline'"
	);
	const sent = run.send(node, frame(1));
	await pause(600);
	expect(await isSettled(sent)).toBe(false);
	expect(await count()).toBe(1);
	// The copy that takes over gets what was never acknowledged.
	await run.pipeline.close();
	await run.rows("UPDATE lease SET until_ms = 0 WHERE name = 'pipeline'");
	await run.subscriber.close();
	await run.beginPipeline();
	await sent;
	expect(await count()).toBe(2);
});
