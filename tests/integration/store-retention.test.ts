import { afterAll, beforeAll, expect, test } from 'vitest';
import type { RowDataPacket } from 'mysql2/promise';
import { connect, type Store } from '$lib/server/store/connect';
import { DAY_MS, ensurePartitions } from '$lib/server/store/partitions';
import { keepHouse, type RetentionReport } from '$lib/server/store/retention';
import * as t from '$lib/server/store/schema';
import { migrated, startDatabase, type TestDatabase } from '../support/database';

/**
 * Site 1 keeps readings 40 days and events 60, site 2 keeps both 100 days. Days are counted back
 * from `nowMs`, which lies 200 days ahead so that single days have partitions.
 */
let server: TestDatabase;
let store: Store;
let report: RetentionReport | null;
const startMs = Date.now();
const nowMs = startMs + 200 * DAY_MS;
const AGES_DAYS = [1, 39, 41, 99, 103];

beforeAll(async () => {
	server = await startDatabase();
	await migrated(server.url);
	await ensurePartitions(server.url, startMs + 90 * DAY_MS);
	await ensurePartitions(server.url, nowMs);
	store = connect(server.url);
	await seed();
	await seedPersonal();
	report = await keepHouse(server.url, nowMs);
});

afterAll(async () => {
	await store.close();
	await server.close();
});

async function seed(): Promise<void> {
	const { db } = store;
	await db.insert(t.profile).values({ code: 'p', body: '{}', builtIn: true, changedAtMs: startMs });
	for (const [id, readingDays, eventDays] of [
		[1, 40, 60],
		[2, 100, 100]
	] as const) {
		const place = { latDeg: 1, lonDeg: 1, timezone: 'UTC' };
		await db.insert(t.site).values({
			...{ id, slug: `s${id}`, name: `s${id}`, readingDays, eventDays, lastChange: 5 },
			...{ ...place, createdAtMs: startMs }
		});
		await db.insert(t.zone).values({ id, siteId: id, code: 'a', name: 'a' });
		await db.insert(t.bay).values({ id, siteId: id, zoneId: id, code: 'a', createdAtMs: 1 });
		await db.insert(t.bay).values({
			...{ id: id + 10, siteId: id, zoneId: id, code: 'home', personal: true, createdAtMs: 1 }
		});
		await db.insert(t.node).values({
			...{ id, serial: `NODE-${id}`, siteId: id, profileCode: 'p', createdAtMs: 1 },
			mqttHash: Buffer.alloc(32)
		});
		await seedRows(id);
	}
}

async function seedRows(id: number): Promise<void> {
	const counts = { boot: 1, seq: 1, row: 0, x: 1, y: 1, z: 1, polarity: 1 };
	for (const [index, days] of AGES_DAYS.entries()) {
		const atMs = nowMs - days * DAY_MS;
		await store.db.insert(t.reading).values({ nodeId: id, atMs, ...counts });
		// The oldest has the lowest id, as in life.
		const logId = AGES_DAYS.length - index;
		const both = { siteId: id, id: logId, bayId: id, recordedAtMs: atMs };
		await store.db.insert(t.change).values({ ...both, kind: 'event' });
		const said = { type: 'arrival', state: 'occupied', uncertaintyS: 1 } as const;
		await store.db.insert(t.event).values({ ...both, ...said, atMs });
		await store.db.insert(t.history).values({ bayId: id, atMs, decidedAtMs: atMs, ...said });
	}
}

/** Events and history of the personal bay of site 2, in the change log after those of the other bay. */
async function seedPersonal(): Promise<void> {
	for (const [index, hours] of [500, 48, 30, 20, 2].entries()) {
		const atMs = nowMs - hours * 3_600_000;
		const both = { siteId: 2, id: 6 + index, bayId: 12, recordedAtMs: atMs };
		const said = { type: 'arrival', state: 'occupied', uncertaintyS: 1 } as const;
		await store.db.insert(t.change).values({ ...both, kind: 'event' });
		await store.db.insert(t.event).values({ ...both, ...said, atMs });
		await store.db.insert(t.history).values({ bayId: 12, atMs, decidedAtMs: atMs, ...said });
	}
}

async function agesLeft(table: string, where: string, column = 'at_ms'): Promise<number[]> {
	const [rows] = await store.pool.query<RowDataPacket[]>(
		`SELECT ${column} AS at FROM ${table} WHERE ${where} ORDER BY 1 DESC`
	);
	return rows.map((row) => Math.round((nowMs - Number(row['at'])) / DAY_MS));
}

test('a site that keeps less is purged of readings, the other keeps its own', async () => {
	expect(await agesLeft('reading', 'node_id = 1')).toEqual([1, 39]);
	expect(await agesLeft('reading', 'node_id = 2')).toEqual([1, 39, 41, 99]);
});

test('days that no site keeps are dropped whole', () => {
	expect(report?.partitionsDropped.length).toBeGreaterThan(0);
	const oldest = new Date(nowMs - 101 * DAY_MS).toISOString().slice(0, 10).replaceAll('-', '');
	for (const name of report?.partitionsDropped ?? []) expect(name < `p${oldest}`).toBe(true);
});

test('the change log loses its oldest end, and the site says from which id it is whole', async () => {
	expect(await agesLeft('`change`', 'site_id = 1', 'recorded_at_ms')).toEqual([1, 39, 41]);
	expect(await agesLeft('event', 'site_id = 1')).toEqual([1, 39, 41]);
	const [rows] = await store.pool.query<RowDataPacket[]>(
		'SELECT id, first_change AS first FROM site ORDER BY id'
	);
	// Ids 1 and 2 of site 1 (103 and 99 days old) and id 1 of site 2 are gone.
	expect(rows.map((row) => row['first'] as number)).toEqual([3, 2]);
});

test('the last history entry before the limit stays, so that the state then is known', async () => {
	expect(await agesLeft('history', 'bay_id = 1')).toEqual([1, 39, 41, 99]);
	expect(await agesLeft('history', 'bay_id = 2')).toEqual([1, 39, 41, 99, 103]);
});

test('events of a personal bay go after a day, their ids in the log stay', async () => {
	expect(await agesLeft('event', 'bay_id = 12')).toEqual([0, 1]);
	expect(await agesLeft('history', 'bay_id = 12')).toHaveLength(5);
	const [rows] = await store.pool.query<RowDataPacket[]>(
		'SELECT COUNT(*) AS n FROM `change` WHERE bay_id = 12'
	);
	expect(rows[0]?.['n']).toBe(5);
});

test('a second round finds nothing to do', async () => {
	expect(await keepHouse(server.url, nowMs)).toEqual({
		partitionsMade: 0,
		partitionsDropped: [],
		rowsDeleted: 0
	});
});
