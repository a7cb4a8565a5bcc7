import { createConnection, type Connection, type RowDataPacket } from 'mysql2/promise';
import { afterAll, beforeAll, expect, test } from 'vitest';
import {
	DAY_MS,
	DAYS_AHEAD,
	dropPartitions,
	ensurePartitions,
	listPartitions
} from '$lib/server/store/partitions';
import { migrated, startDatabase, type TestDatabase } from '../support/database';

let server: TestDatabase;
let connection: Connection;
const nowMs = Date.now();
const todayMs = Math.floor(nowMs / DAY_MS) * DAY_MS;

beforeAll(async () => {
	server = await startDatabase();
	await migrated(server.url);
	connection = await createConnection({ uri: server.url });
});

afterAll(async () => {
	connection.destroy();
	await server.close();
});

async function insertAt(atMs: number): Promise<void> {
	await connection.query(
		'INSERT INTO reading (node_id, at_ms, boot, seq, `row`, x, y, z, polarity) VALUES (1, ?, 1, 1, 0, 1, 2, 3, 1)',
		[atMs]
	);
}

async function partitionOf(atMs: number): Promise<string | undefined> {
	const [rows] = await connection.query<RowDataPacket[]>(
		'EXPLAIN PARTITIONS SELECT * FROM reading WHERE at_ms = ?',
		[atMs]
	);
	return rows[0]?.['partitions'] as string | undefined;
}

const dayName = (ms: number) => `p${new Date(ms).toISOString().slice(0, 10).replaceAll('-', '')}`;

test('each UTC day from three weeks back to thirty ahead has a partition named after it', async () => {
	for (const day of [-20, -1, 0, 1, DAYS_AHEAD]) {
		const ms = todayMs + day * DAY_MS;
		expect(await partitionOf(ms)).toBe(dayName(ms));
		expect(await partitionOf(ms + DAY_MS - 1)).toBe(dayName(ms));
	}
});

test('a reading of 2020 finds a place, one beyond the last partition is refused', async () => {
	await insertAt(Date.UTC(2020, 0, 1));
	await expect(insertAt(todayMs + (DAYS_AHEAD + 2) * DAY_MS)).rejects.toMatchObject({
		errno: 1526
	});
});

test('making partitions twice, or twice at once, makes them once', async () => {
	const later = nowMs + 3 * DAY_MS;
	const before = (await listPartitions(connection)).length;
	await Promise.all([ensurePartitions(server.url, later), ensurePartitions(server.url, later)]);
	expect(await ensurePartitions(server.url, later)).toBe(0);
	expect((await listPartitions(connection)).length).toBe(before + 3);
});

test('a long reader delays new partitions, and ingest for no more than three seconds', async () => {
	const reader = await createConnection({ uri: server.url });
	await reader.query('START TRANSACTION');
	await reader.query('SELECT COUNT(*) FROM reading');
	let done = false;
	const making = ensurePartitions(server.url, nowMs + 10 * DAY_MS).then((made) => {
		done = true;
		return made;
	});
	let longestMs = 0;
	const untilMs = Date.now() + 5_000;
	for (let at = 0; Date.now() < untilMs; at += 1) {
		const beganMs = performance.now();
		await insertAt(todayMs + at);
		longestMs = Math.max(longestMs, performance.now() - beganMs);
		await new Promise((resolve) => setTimeout(resolve, 20));
	}
	expect(done).toBe(false);
	// lock_wait_timeout = 1 makes the ALTER wait twice (measured: 2.03 s), then ingest goes on.
	expect(longestMs).toBeLessThan(3_000);
	await reader.query('COMMIT');
	reader.destroy();
	expect(await making).toBe(7);
});

test('only partitions wholly before the limit are dropped, and never the last', async () => {
	const keepFromMs = todayMs - 10 * DAY_MS;
	const dropped = await dropPartitions(server.url, keepFromMs + DAY_MS / 2);
	expect(dropped.at(-1)).toBe(dayName(keepFromMs - DAY_MS));
	expect((await listPartitions(connection))[0]?.name).toBe(dayName(keepFromMs));
	expect(await dropPartitions(server.url, keepFromMs + DAY_MS / 2)).toEqual([]);
	await dropPartitions(server.url, Number.MAX_SAFE_INTEGER);
	expect(await listPartitions(connection)).toHaveLength(1);
});
