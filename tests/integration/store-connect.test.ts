import { eq, sql } from 'drizzle-orm';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { createSecret } from '$lib/server/secret';
import { checkSecret } from '$lib/server/secret-check';
import { connect, type Store } from '$lib/server/store/connect';
import * as t from '$lib/server/store/schema';
import { migrated, startDatabase, type TestDatabase } from '../support/database';

let server: TestDatabase;
let store: Store;

beforeAll(async () => {
	server = await startDatabase();
	store = connect(await migrated(server.url));
	await store.db.insert(t.profile).values({
		...{ code: 'p', body: '{"a":[1,2]}', builtIn: true, changedAtMs: 5_000_000_000_000 }
	});
	const place = { latDeg: 1, lonDeg: 1, timezone: 'UTC' };
	await store.db
		.insert(t.site)
		.values({ id: 1, slug: 'Yard', name: 'yard', createdAtMs: 1, ...place });
	await store.db.insert(t.node).values({
		...{ id: 1, serial: 'NODE-1', siteId: 1, profileCode: 'p', createdAtMs: 1 },
		mqttHash: Buffer.alloc(32, 7)
	});
});

afterAll(async () => {
	await store.close();
	await server.close();
});

test('instants come back as numbers, JSON text as text, bytes as bytes', async () => {
	const [profile] = await store.db.select().from(t.profile);
	expect(profile).toMatchObject({ changedAtMs: 5_000_000_000_000, body: '{"a":[1,2]}' });
	const [node] = await store.db.select().from(t.node);
	expect(node?.mqttHash.equals(Buffer.alloc(32, 7))).toBe(true);
});

test('all 64 bits of a block of received messages are kept', async () => {
	const bits = 0x8000_0000_0000_0001n;
	await store.db.insert(t.received).values({ nodeId: 1, boot: 1, block: 0, bits });
	await store.db
		.update(t.received)
		.set({ bits: sql`bits | ${0x0000_0001_0000_0000n}` })
		.where(eq(t.received.nodeId, 1));
	const [row] = await store.db.select().from(t.received);
	expect(row?.bits).toBe(0x8000_0001_0000_0001n);
});

test('a value that does not fit is refused, never cut', async () => {
	const counts = { nodeId: 1, atMs: Date.now(), boot: 1, seq: 1, row: 0, y: 1, z: 1 };
	const tooLarge = store.db
		.insert(t.reading)
		.values({ ...counts, x: 8_388_608, polarity: 1 })
		.execute();
	// ER_WARN_DATA_OUT_OF_RANGE
	await expect(tooLarge).rejects.toMatchObject({ cause: { errno: 1264 } });
});

test('slugs tell capitals apart, addresses of people do not', async () => {
	const place = { latDeg: 1, lonDeg: 1, timezone: 'UTC', createdAtMs: 1 };
	await store.db.insert(t.site).values({ id: 2, slug: 'yard', name: 'yard', ...place });
	const person = { name: 'A', initials: 'A', role: 'admin' as const, createdAtMs: 1 };
	await store.db.insert(t.person).values({ ...person, email: 'a@lodekeep.example' });
	await expect(
		store.db
			.insert(t.person)
			.values({ ...person, email: 'A@lodekeep.example' })
			.execute()
	).rejects.toMatchObject({ cause: { errno: 1062 } });
});

test('a connection pool outlives a database that is killed and started again', async () => {
	await server.kill();
	await expect(store.db.select().from(t.site).execute()).rejects.toThrow();
	await server.start();
	expect(await store.db.select().from(t.site)).toHaveLength(2);
});

const secretOf = (letter: string, previous?: string) =>
	createSecret(letter.repeat(32), previous?.repeat(32));

test('the secret of the first start is taken again, another is refused', async () => {
	const unchanged = { ok: true, renewed: 0 };
	expect(await checkSecret(store.db, secretOf('a'))).toEqual(unchanged);
	expect(await checkSecret(store.db, secretOf('a'))).toEqual(unchanged);
	const refused = await checkSecret(store.db, secretOf('b'));
	expect(refused.ok ? '' : refused.reason).toContain('LODEKEEP_SECRET is not the one');
});

test('with the former secret as the previous one all keys are sealed anew, and it can go', async () => {
	const key = Buffer.alloc(32, 9);
	const keySealed = secretOf('a').seal('node key', 1, key);
	await store.db.update(t.node).set({ keySealed }).where(eq(t.node.id, 1));
	expect(await checkSecret(store.db, secretOf('b', 'a'))).toEqual({ ok: true, renewed: 1 });
	expect(await checkSecret(store.db, secretOf('b'))).toEqual({ ok: true, renewed: 0 });
	expect((await checkSecret(store.db, secretOf('a'))).ok).toBe(false);
	const [node] = await store.db.select().from(t.node);
	const opened = secretOf('b').open('node key', 1, node!.keySealed!);
	expect(opened).toEqual({ ok: true, bytes: key, previous: false });
});
