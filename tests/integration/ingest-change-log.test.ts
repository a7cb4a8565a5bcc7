import { afterAll, beforeAll, expect, test } from 'vitest';
import { createSecret } from '$lib/server/secret';
import * as changes from '$lib/server/store/queries/changes';
import type { Store } from '$lib/server/store/connect';
import { startDatabase, type TestDatabase } from '../support/database';
import { makeSite, openStore, SECRET, type TestSite } from '../support/ingest';

let database: TestDatabase;
let store: Store;
let site: TestSite;

beforeAll(async () => {
	database = await startDatabase();
	store = openStore(database.url);
	site = await makeSite(store, createSecret(SECRET), { nodes: 1 });
});
afterAll(async () => {
	await store.close();
	await database.close();
});

const WRITERS = 10;
const READERS = 10;
const EACH = 60;

/** Transactions of one to three changes that stay open for a moment, some of them rolled back. */
async function write(writer: number): Promise<number> {
	let written = 0;
	for (let k = 0; k < EACH; k += 1) {
		const connection = await store.pool.getConnection();
		try {
			await connection.query('START TRANSACTION');
			const n = 1 + ((writer + k) % 3);
			const items = Array.from({ length: n }, () => ({
				kind: 'bay' as const,
				bayId: site.nodes[0]!.bayId,
				nodeId: null
			}));
			await changes.append(connection, site.siteId, items, writer);
			if (k % 5 === 0) await connection.query('SELECT SLEEP(0.002)');
			const keep = (writer * 7 + k) % 11 !== 0;
			await connection.query(keep ? 'COMMIT' : 'ROLLBACK');
			if (keep) written += n;
		} finally {
			connection.release();
		}
	}
	return written;
}

test('10 writers and 10 readers: every reader sees every id once, in order, with nothing skipped', async () => {
	let writing = true;
	const read = async (): Promise<number[]> => {
		const seen: number[] = [];
		for (;;) {
			const done = !writing;
			const page = await changes.after(store.pool, site.siteId, seen.at(-1) ?? 0, 7);
			if (!page.ok) throw new Error(page.reason);
			seen.push(...page.items.map(({ id }) => id));
			if (done && page.items.length === 0) return seen;
		}
	};
	const readers = Array.from({ length: READERS }, read);
	const written = await Promise.all(
		Array.from({ length: WRITERS }, async (_, w) => await write(w))
	);
	writing = false;
	const total = written.reduce((sum, n) => sum + n, 0);
	const expected = Array.from({ length: total }, (_, i) => i + 1);
	for (const seen of await Promise.all(readers)) expect(seen).toEqual(expected);
	expect(await changes.cursor(store.pool, site.siteId)).toBe(total);
});

test('a reader stops before a hole and goes on when it is filled', async () => {
	const last = await changes.cursor(store.pool, site.siteId);
	const insert = async (id: number) =>
		await changes.write(
			store.pool,
			site.siteId,
			id,
			[{ kind: 'bay', bayId: null, nodeId: null }],
			1
		);
	await store.pool.query('UPDATE site SET last_change = ? WHERE id = ?', [last + 3, site.siteId]);
	await insert(last + 1);
	await insert(last + 3);
	expect(await changes.after(store.pool, site.siteId, last, 10)).toMatchObject({ last: last + 1 });
	expect(await changes.cursor(store.pool, site.siteId)).toBe(last + 1);
	await insert(last + 2);
	expect(await changes.after(store.pool, site.siteId, last + 1, 10)).toMatchObject({
		last: last + 3
	});
});

test('a cursor from before the oldest kept id is gone, the one just before it is good', async () => {
	await store.pool.query('UPDATE site SET first_change = 50 WHERE id = ?', [site.siteId]);
	expect(await changes.after(store.pool, site.siteId, 48, 10)).toEqual({
		ok: false,
		reason: 'gone',
		firstId: 50
	});
	const page = await changes.after(store.pool, site.siteId, 49, 1);
	expect(page).toMatchObject({ ok: true, last: 50 });
	expect(await changes.after(store.pool, 99_999, 0, 1)).toEqual({ ok: false, reason: 'no_site' });
});
