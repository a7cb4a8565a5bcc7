import { brotliDecompressSync, gunzipSync } from 'node:zlib';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import * as changes from '$lib/server/store/queries/changes';
import { transaction } from '$lib/server/store/transaction';
import type { TestApp } from '../support/app';
import { openRoom, type Room } from '../support/api-room';

let room: Room;
let ask: ReturnType<TestApp['withKey']>;
const BAYS = '/api/v1/sites/tallow-yard/bays';

beforeAll(async () => {
	room = await openRoom();
	ask = await room.asking();
});
afterAll(async () => {
	await room.close();
});

/** A vehicle leaves, as the pipeline writes it: state, change and event in one transaction. */
async function depart(bay: string): Promise<number> {
	const bayId = room.seeded.bays[bay]!;
	const siteId = room.seeded.sites.yard;
	const nowMs = Date.now();
	return await transaction(room.store, async (tx) => {
		const id = await changes.allot(tx.sql, siteId, 1);
		await changes.write(tx.sql, siteId, id, [{ kind: 'event', bayId, nodeId: null }], nowMs);
		const event = { bayId, nodeId: null, type: 'departure', state: 'vacant', atMs: nowMs } as const;
		const rest = { confidence20: 19, uncertaintyS: 1, late: false, voids: null, evidence: null };
		await changes.writeEvents(tx.sql, siteId, id, [{ ...event, ...rest }], nowMs);
		await tx.sql.query(
			"UPDATE bay_state SET state = 'vacant', since_ms = ?, change_id = ? WHERE bay_id = ?",
			[nowMs, id, bayId]
		);
		return id;
	});
}

describe('conditional requests (RFC 9110, 13.1.2 and 15.4.5; check-values 9i)', () => {
	test('an unchanged list is a 304 with all fields that the 200 has, and no body', async () => {
		const first = await ask(BAYS);
		const again = await ask(BAYS, { headers: { 'if-none-match': first.headers.etag! } });
		expect(again.status).toBe(304);
		expect(again.bytes).toHaveLength(0);
		for (const name of ['etag', 'vary', 'cache-control']) {
			expect(again.headers[name]).toBe(first.headers[name]);
		}
		expect(first.headers['cache-control']).toBe('private, no-cache');
		expect(first.headers.vary).toBe('Accept, Accept-Encoding, Authorization, Cookie');
		expect(again.headers['site-as-of']).toMatch(/^\d{4}-\d\d-\d\dT\d\d:\d\d:\d\d\.\d{3}Z$/);
	});

	test('a weak form, a list and a star match, another tag does not', async () => {
		const tag = (await ask(BAYS)).headers.etag!;
		const status = async (header: string) =>
			(await ask(BAYS, { headers: { 'if-none-match': header } })).status;
		expect(await status(`W/${tag}`)).toBe(304);
		expect(await status(`"other", ${tag}`)).toBe(304);
		expect(await status('*')).toBe(304);
		expect(await status('"other"')).toBe(200);
	});

	test('a change of one bay changes the tag, a heartbeat does not', async () => {
		const before = await ask(BAYS);
		await room.store.pool.query('UPDATE node_fast SET heard_at_ms = heard_at_ms + 60000');
		const beat = await ask(BAYS, { headers: { 'if-none-match': before.headers.etag! } });
		expect(beat.status).toBe(304);
		await depart('A-01');
		const after = await ask(BAYS, { headers: { 'if-none-match': before.headers.etag! } });
		expect(after.status).toBe(200);
		expect(after.headers.etag).not.toBe(before.headers.etag);
	});

	test('reach, media type and coding each have a tag of their own', async () => {
		const other = await room.asking({ personalAllowed: false });
		const tags = [
			(await ask(BAYS)).headers.etag,
			(await other(BAYS)).headers.etag,
			(await ask(BAYS, { headers: { accept: 'application/geo+json' } })).headers.etag,
			(await ask(BAYS, { headers: { 'accept-encoding': 'gzip' } })).headers.etag,
			(await ask(BAYS, { headers: { 'accept-encoding': 'br' } })).headers.etag
		];
		expect(new Set(tags).size).toBe(tags.length);
	});

	test('every coding gives the same bytes, also the second time, from memory', async () => {
		const plain = (await ask(BAYS)).bytes;
		for (let i = 0; i < 2; i++) {
			const gzip = await ask(BAYS, { headers: { 'accept-encoding': 'gzip' } });
			expect(gzip.headers['content-encoding']).toBe('gzip');
			expect(gunzipSync(gzip.bytes)).toEqual(plain);
			const br = await ask(BAYS, { headers: { 'accept-encoding': 'gzip, br' } });
			expect(br.headers['content-encoding']).toBe('br');
			expect(brotliDecompressSync(br.bytes)).toEqual(plain);
		}
	});
});

test('a 304 reads the row of the site and never the big tables', async () => {
	const tag = (await ask(BAYS)).headers.etag!;
	const big = ['bay', 'bay_state', 'event', '`change`', 'history', 'reading', 'closure', 'zone'];
	const lock = await room.store.pool.getConnection();
	// Whoever reads one of these now waits until they are let go.
	await lock.query(`LOCK TABLES ${big.map((name) => `${name} WRITE`).join(', ')}`);
	const waiting = ask(`${BAYS}?limit=999`);
	for (let i = 0; i < 20; i++) {
		expect((await ask(BAYS, { headers: { 'if-none-match': tag } })).status).toBe(304);
	}
	let answered = false;
	void waiting.then(() => (answered = true));
	await ask('/api/v1/sites/tallow-yard/live');
	expect(answered).toBe(false);
	await lock.query('UNLOCK TABLES');
	lock.release();
	expect((await waiting).status).toBe(200);
});

describe('the change log over the wire', () => {
	test('a poll tells exactly the bays that changed since its cursor, once each', async () => {
		const { changes: from } = (await ask(BAYS)).json() as { changes: number };
		await depart('A-03');
		await depart('B-01');
		await depart('A-03');
		const poll = (await ask(`${BAYS}?changes=${from}`)).json() as {
			items: { code: string; state: string }[];
			changes: number;
		};
		expect(poll.items.map(({ code, state }) => [code, state])).toEqual([
			['A-03', 'vacant'],
			['B-01', 'vacant']
		]);
		expect(poll.changes).toBe(from + 3);
		const none = (await ask(`${BAYS}?changes=${poll.changes}`)).json();
		expect(none).toEqual({ items: [], next: null, changes: poll.changes });
	});

	test('the cursor is fixed by the first page: what changes between pages comes with the next poll', async () => {
		const first = (await ask(`${BAYS}?limit=20`)).json() as { next: string; changes: number };
		await depart('A-02');
		const second = (await ask(`${BAYS}?limit=20&cursor=${first.next}`)).json();
		expect(second['changes']).toBe(first.changes);
		const poll = (await ask(`${BAYS}?changes=${first.changes}`)).json() as {
			items: { code: string }[];
		};
		expect(poll.items.map((bay) => bay.code)).toEqual(['A-02']);
	});

	test('a removed bay is told as removed, and one that comes back under its code is not', async () => {
		const { changes: from } = (await ask(BAYS)).json() as { changes: number };
		const add = async () =>
			await ask(BAYS, { method: 'POST', body: [{ code: 'D-01', zone: 'D' }] });
		expect((await add()).status).toBe(201);
		const bay = `${BAYS}/D-01`;
		expect((await ask(bay, { method: 'DELETE' })).status).toBe(204);
		const gone = (await ask(`${BAYS}?changes=${from}`)).json() as { items: unknown[] };
		expect(gone.items).toEqual([{ code: 'D-01', removed: true }]);
		expect((await add()).status).toBe(201);
		const back = (await ask(`${BAYS}?changes=${from}`)).json() as { items: { state?: string }[] };
		expect(back.items).toHaveLength(1);
		expect(back.items[0]?.state).toBe('unknown');
	});

	test('a bay that becomes personal is told once as removed, and of its life nothing more', async () => {
		const blind = await room.asking({ personalAllowed: false });
		const { changes: from } = (await blind(BAYS)).json() as { changes: number };
		const patched = await ask(`${BAYS}/B-08`, { method: 'PATCH', body: { personal: true } });
		expect(patched.status).toBe(200);
		const poll = (await blind(`${BAYS}?changes=${from}`)).json() as {
			items: unknown[];
			changes: number;
		};
		expect(poll.items).toEqual([{ code: 'B-08', removed: true }]);
		await depart('B-08');
		const next = (await blind(`${BAYS}?changes=${poll.changes}`)).json() as { items: unknown[] };
		expect(next.items).toEqual([]);
	});

	test('eight writers and four readers: every reader reads every id once, in order, without a gap', async () => {
		const { changes: from } = (await ask('/api/v1/sites/far-shed/changes')).json() as {
			changes: number;
		};
		const bayIds = Object.values(room.seeded.shedBays);
		const PER_WRITER = 25;
		const WRITERS = 8;
		const writer = async (w: number) => {
			for (let i = 0; i < PER_WRITER; i++) {
				await transaction(room.store, async (tx) => {
					const row = { kind: 'bay' as const, bayId: bayIds[(w + i) % 3]!, nodeId: null };
					await changes.append(tx.sql, room.seeded.sites.shed, [row], Date.now());
				});
			}
		};
		const total = from + WRITERS * PER_WRITER;
		const reader = async () => {
			const ids: number[] = [];
			let after = from;
			while (after < total) {
				const page = (
					await ask(`/api/v1/sites/far-shed/changes?after=${after}&limit=40`)
				).json() as {
					items: { id: number }[];
					changes: number;
				};
				ids.push(...page.items.map((item) => item.id));
				after = page.changes;
			}
			return ids;
		};
		const [reads] = await Promise.all([
			Promise.all(Array.from({ length: 4 }, reader)),
			Promise.all(Array.from({ length: WRITERS }, (_, w) => writer(w)))
		]);
		const every = Array.from({ length: total - from }, (_, i) => from + 1 + i);
		for (const ids of reads) expect(ids).toEqual(every);
	});

	test('events after an id are those behind it; effective leaves voided ones and their voiders out', async () => {
		const arrival = await depart('A-06');
		const siteId = room.seeded.sites.yard;
		const voider = await transaction(room.store, async (tx) => {
			const id = await changes.allot(tx.sql, siteId, 1);
			const bayId = room.seeded.bays['A-06']!;
			await changes.write(tx.sql, siteId, id, [{ kind: 'event', bayId, nodeId: null }], 0);
			await changes.writeEvents(
				tx.sql,
				siteId,
				id,
				[
					{
						...{ bayId, nodeId: null, type: 'voided', state: 'occupied', atMs: Date.now() },
						...{ confidence20: null, uncertaintyS: 1, late: true, voids: arrival, evidence: null }
					}
				],
				Date.now()
			);
			return id;
		});
		const path = `/api/v1/sites/tallow-yard/events?after=${arrival - 1}`;
		const all = (await ask(path)).json() as { items: { id: number; voids?: number }[] };
		expect(all.items.map((e) => [e.id, e.voids])).toEqual([
			[arrival, undefined],
			[voider, arrival]
		]);
		const effective = (await ask(`${path}&effective=true`)).json() as { items: unknown[] };
		expect(effective.items).toEqual([]);
	});
});
