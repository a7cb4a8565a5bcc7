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
	await seedLoop();
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

/** Notices and film refreshes of site 1 (events 60 days), one of each open for 200 days; one of the installation. */
async function seedLoop(): Promise<void> {
	const { db } = store;
	await db.insert(t.person).values({
		...{ id: 1, email: 'a@lodekeep.example', name: 'A', initials: 'A', role: 'admin' },
		createdAtMs: 1
	});
	for (const [i, days] of [200, 61, 59, null].entries()) {
		const endMs = days === null ? null : nowMs - days * DAY_MS;
		const id = i + 1;
		const about = `node:${id}`;
		await db.insert(t.notice).values({
			...{ id, siteId: 1, about, subject: endMs === null ? about : null, kind: 'silent' },
			...{ kinds: 'silent', sinceMs: 1, openedAtMs: 1, deadlineMs: 1, facts: '{}' },
			closedAtMs: endMs
		});
		await db.insert(t.noticeEntry).values({ noticeId: id, atMs: 1, what: 'opened' });
		await db.insert(t.mailWish).values({
			...{ personId: 1, siteId: 1, noticeId: id, what: 'opened', wishedAtMs: 1, dueMs: 1 },
			doneAtMs: endMs ?? 1
		});
		await db.insert(t.refreshBulk).values({
			...{ id, siteId: 1, what: 'zone a', reason: '', leftOut: '[]', askedBy: 'rule' },
			...{ askedAtMs: 1, endedAtMs: endMs }
		});
		await db.insert(t.refresh).values({
			...{ id, siteId: 1, nodeId: 1, bayId: 1, bulkId: id, origin: 'person', reason: '' },
			...{ state: endMs === null ? 'asked' : 'proved', evidence: '{}', askedBy: 'rule' },
			...{ askedAtMs: 1, endedAtMs: endMs }
		});
		await db.insert(t.refreshTransition).values({
			...{ refreshId: id, siteId: 1, nodeId: 1, toState: 'asked', byActor: 'rule', why: '' },
			atMs: 1
		});
	}
	await db.insert(t.notice).values({
		...{ id: 9, about: 'mail:1', kind: 'mail_failing', kinds: 'mail_failing', sinceMs: 1 },
		...{ openedAtMs: 1, deadlineMs: 1, facts: '{}', closedAtMs: nowMs - 91 * DAY_MS }
	});
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

test('closed notices and ended film refreshes go with the events of their site, open ones stay', async () => {
	const ids = async (table: string, column = 'id') => {
		const [rows] = await store.pool.query<RowDataPacket[]>(
			`SELECT ${column} AS id FROM ${table} ORDER BY 1`
		);
		return rows.map((row) => row['id'] as number);
	};
	expect(await ids('notice')).toEqual([3, 4]);
	expect(await ids('notice_entry', 'notice_id')).toEqual([3, 4]);
	expect(await ids('mail_wish', 'notice_id')).toEqual([3, 4]);
	expect(await ids('refresh')).toEqual([3, 4]);
	expect(await ids('refresh_transition', 'refresh_id')).toEqual([3, 4]);
	expect(await ids('refresh_bulk')).toEqual([3, 4]);
});

test('a second round finds nothing to do', async () => {
	expect(await keepHouse(server.url, nowMs)).toEqual({
		partitionsMade: 0,
		partitionsDropped: [],
		rowsDeleted: 0
	});
});
