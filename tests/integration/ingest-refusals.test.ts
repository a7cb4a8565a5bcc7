import { afterAll, beforeAll, expect, test } from 'vitest';
import { sealUp } from '$lib/wire/frames';
import { upTopic } from '$lib/wire/topics';
import type { ReadingFrame } from '$lib/wire/types';
import { keyFor, QUIET, reading, sealed, type TestNode } from '../support/ingest';
import { IngestRun } from '../support/ingest-run';

const run = new IngestRun();
/** Known to the broker, but registered nowhere. */
const ghost = { serial: 'GHOST-0001', key: keyFor('GHOST-0001') };
let seq = 0;

beforeAll(async () => {
	await run.begin({ nodes: 4 }, [ghost.key]);
});
afterAll(async () => await run.end());

const good = (): ReadingFrame => reading({ seq: seq++, t: Date.now(), rows: [[0, QUIET]] });

/** The newest rejection kept of a serial. The PUBACK of `send` says that it is committed. */
async function refusalOf(serial: string): Promise<{ reason: string; head: Buffer; n: number }> {
	const [row] = await run.rows<{ reason: string; head: Buffer; n: number }>(
		'SELECT reason, head, length_bytes AS n FROM rejected WHERE serial = ? ORDER BY id DESC LIMIT 1',
		[serial]
	);
	if (row === undefined) throw new Error('nothing was kept');
	return row;
}

async function refused(
	node: Pick<TestNode, 'serial' | 'key'>,
	bytes: Uint8Array,
	kind = 'reading'
) {
	await run.sendBytes(node, kind, bytes);
	return await refusalOf(node.serial);
}

const withKey = (node: TestNode, frame: ReadingFrame, key: Buffer): Uint8Array =>
	sealUp(upTopic(node.serial, 'reading'), frame, key, 5);

test('over 4,096 bytes: too_large, and the first 512 bytes are kept', async () => {
	const bytes = Buffer.alloc(5_000, 7);
	const row = await refused(run.node(0), bytes);
	expect(row).toMatchObject({ reason: 'too_large', n: 5_000 });
	expect(row.head).toEqual(bytes.subarray(0, 512));
});

test('bytes that are no envelope: not_decodable', async () => {
	expect((await refused(run.node(0), Buffer.from('no cbor here'))).reason).toBe('not_decodable');
});

test('rows that are no list of rows: wrong_type', async () => {
	const empty = { ...good(), rows: [] };
	expect((await refused(run.node(0), sealed(run.node(0), empty))).reason).toBe('wrong_type');
});

test('121 rows: too_many_rows', async () => {
	const rows = Array.from({ length: 121 }, (_, i) => [i, QUIET] as const);
	const frame = reading({ seq: seq++, t: Date.now(), rows });
	expect((await refused(run.node(0), sealed(run.node(0), frame))).reason).toBe('too_many_rows');
});

test('counts that an 18-bit part cannot produce: out_of_range', async () => {
	const frame = reading({ seq: seq++, t: Date.now(), rows: [[0, [131_072, 0, 0]]] });
	expect((await refused(run.node(0), sealed(run.node(0), frame))).reason).toBe('out_of_range');
});

test('a serial that is registered nowhere: unknown_serial', async () => {
	const bytes = sealUp(upTopic(ghost.serial, 'reading'), good(), ghost.key.key, 5);
	expect((await refused(ghost, bytes)).reason).toBe('unknown_serial');
});

test("another node's key: bad_tag", async () => {
	const bytes = withKey(run.node(0), good(), run.node(1).key.key);
	expect((await refused(run.node(0), bytes)).reason).toBe('bad_tag');
});

const json = () =>
	Buffer.from(JSON.stringify({ boot: 1, seq: seq++, t: Date.now(), rows: [[0, ...QUIET]] }));

test('JSON from a node that may not: unsigned_not_allowed', async () => {
	expect((await refused(run.node(1), json())).reason).toBe('unsigned_not_allowed');
});

test('JSON from a node that may is stored and marked unsigned', async () => {
	await run.rows('UPDATE node SET unsigned_allowed = 1 WHERE id = ?', [run.node(2).id]);
	await run.sendBytes(run.node(2), 'reading', json());
	const rows = await run.rows('SELECT flags FROM reading WHERE node_id = ?', [run.node(2).id]);
	expect(rows).toEqual([{ flags: 8 }]);
});

test('a topic below the own prefix that is none of the five: bad_topic', async () => {
	const row = await refused(run.node(0), sealed(run.node(0), good()), 'weather');
	expect(row.reason).toBe('bad_topic');
});

test('a withdrawn node: withdrawn', async () => {
	await run.rows('UPDATE node SET withdrawn_at_ms = ? WHERE id = ?', [Date.now(), run.node(3).id]);
	await run.pipeline.exclusive(
		async () =>
			await run.pipeline.room.registry.loadSome(
				run.store.pool,
				{ ids: [run.node(3).id] },
				Date.now()
			)
	);
	expect((await refused(run.node(3), sealed(run.node(3), good()))).reason).toBe('withdrawn');
});

test('the last will is a hint: acknowledged, neither stored nor rejected', async () => {
	const before = await run.rows('SELECT COUNT(*) AS n FROM rejected');
	await run.sendBytes(run.node(0), 'gone', Buffer.alloc(0));
	expect(await run.rows('SELECT COUNT(*) AS n FROM rejected')).toEqual(before);
});

test('of 30 rejections in an hour 20 are kept, all 30 are counted and acknowledged', async () => {
	const node = run.node(1);
	for (let i = 0; i < 30; i += 1) await run.sendBytes(node, 'reading', Buffer.from(`x${i}`));
	const [kept] = await run.rows<{ n: number }>(
		'SELECT COUNT(*) AS n FROM rejected WHERE serial = ?',
		[node.serial]
	);
	expect(kept?.n).toBe(20);
	const [counted] = await run.rows<{ n: number }>(
		'SELECT rejected AS n FROM node_count WHERE node_id = ?',
		[node.id]
	);
	// One more: the unsigned message above.
	expect(counted?.n).toBe(31);
});

test('a rejected message never stops the flow: what comes behind it is stored', async () => {
	const node = run.node(0);
	const [bad, fine] = [Buffer.from('rubbish'), good()];
	await Promise.all([run.sendBytes(node, 'reading', bad), run.send(node, fine)]);
	const rows = await run.rows('SELECT seq FROM reading WHERE node_id = ? AND seq = ?', [
		node.id,
		fine.seq
	]);
	expect(rows).toHaveLength(1);
});
