import { createHash } from 'node:crypto';
import type { RowDataPacket } from 'mysql2/promise';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { createSecret } from '$lib/server/secret';
import { mqttPassword } from '$lib/wire/frames';
import { TEST_SECRET, type TestApp } from '../support/app';
import { openRoom, type Room } from '../support/api-room';

let room: Room;
let ask: ReturnType<TestApp['withKey']>;
const YARD = '/api/v1/sites/tallow-yard';

beforeAll(async () => {
	room = await openRoom();
	ask = await room.asking();
});
afterAll(async () => {
	await room.close();
});

const rows = async (text: string, values: unknown[] = []) =>
	(await room.store.pool.query<RowDataPacket[]>(text, values))[0];
const post = async (path: string, body: unknown, headers: Record<string, string> = {}) =>
	await ask(path, { method: 'POST', body, headers });

describe('sites', () => {
	const site = {
		...{ slug: 'new-lot', name: 'New Lot', lat: 1.5, lon: 2.5, altitudeM: 12 },
		timezone: 'Etc/UTC'
	};
	test('a site is made, read, changed and removed', async () => {
		const made = await post('/api/v1/sites', site);
		expect(made.status).toBe(201);
		expect(made.headers.location).toBe('/api/v1/sites/new-lot');
		expect(made.json()).toEqual({ ...site, demo: false });
		expect((await post('/api/v1/sites', site)).status).toBe(409);
		const patch = { method: 'PATCH', body: { name: 'Newer Lot' } };
		expect((await ask('/api/v1/sites/new-lot', patch)).json()).toMatchObject({
			name: 'Newer Lot',
			lat: 1.5
		});
		expect((await ask('/api/v1/sites/new-lot', { method: 'DELETE' })).status).toBe(204);
		expect((await ask('/api/v1/sites/new-lot')).status).toBe(404);
		expect((await post('/api/v1/sites', site)).status).toBe(201);
	});

	test('a time zone that does not exist is refused', async () => {
		const refused = await post('/api/v1/sites', { ...site, slug: 'x', timezone: 'Moon/Base' });
		expect(refused.status).toBe(400);
	});
});

describe('GeoJSON in and out (RFC 7946; check-values 9d)', () => {
	// Exterior counter-clockwise, first = last, [longitude, latitude].
	const ring = [
		[-8.3, 47.6],
		[-8.29997, 47.6],
		[-8.29997, 47.60005],
		[-8.3, 47.60005],
		[-8.3, 47.6]
	];
	const feature = (code: string, coordinates: number[][][]) => ({
		type: 'Feature',
		id: code,
		geometry: { type: 'Polygon', coordinates },
		properties: { zone: 'G' }
	});
	const geo = { accept: 'application/geo+json' };
	const send = async (body: unknown) =>
		await ask(`${YARD}/bays`, {
			method: 'POST',
			headers: { 'content-type': 'application/geo+json' },
			body: JSON.stringify(body)
		});

	test('a FeatureCollection comes back with the same outlines, clockwise ones turned', async () => {
		const features = [feature('G-1', [ring]), feature('G-2', [[...ring].reverse()])];
		const made = await send({ type: 'FeatureCollection', features });
		expect(made.status).toBe(201);
		const answer = await ask(`${YARD}/bays?limit=1000`, { headers: geo });
		expect(answer.headers['content-type']).toBe('application/geo+json');
		const back = answer.json() as {
			type: string;
			features: { id: string; geometry: unknown; properties: Record<string, unknown> }[];
		};
		expect(back.type).toBe('FeatureCollection');
		expect(back).not.toHaveProperty('crs');
		for (const code of ['G-1', 'G-2']) {
			const found = back.features.find((f) => f.id === code);
			expect(found?.geometry).toEqual({ type: 'Polygon', coordinates: [ring] });
			expect(found?.properties).toMatchObject({ code, zone: 'G', state: 'unknown' });
		}
	});

	test('what came out goes in again elsewhere', async () => {
		const out = (await ask(`${YARD}/bays?limit=1000`, { headers: geo })).json();
		const target = { slug: 'copy', name: 'Copy', lat: 47.6, lon: -8.3, timezone: 'Etc/UTC' };
		await post('/api/v1/sites', target);
		const put = await ask('/api/v1/sites/copy/bays', {
			method: 'POST',
			headers: { 'content-type': 'application/geo+json' },
			body: JSON.stringify(out)
		});
		expect(put.status).toBe(201);
		const copy = (await ask('/api/v1/sites/copy/bays?limit=1000', { headers: geo })).json();
		const outlines = (collection: unknown) =>
			(collection as { features: { id: string; geometry: unknown }[] }).features.map((f) => [
				f.id,
				f.geometry
			]);
		expect(outlines(copy)).toEqual(outlines(out));
	});

	test.each([
		['a ring that is not closed', [ring.slice(0, 4)]],
		['a ring of three positions', [[ring[0]!, ring[1]!, ring[0]!]]],
		['latitude before longitude beyond the pole', [ring.map(([lon, lat]) => [lat!, lon! * 20])]],
		['a hole', [ring, ring]]
	])('%s is refused with a pointer, and nothing is added', async (_, coordinates) => {
		const features = [feature('H-1', [ring]), feature('H-2', coordinates)];
		const refused = await send({ type: 'FeatureCollection', features });
		expect(refused.status).toBe(400);
		const { errors } = refused.json() as { errors: { pointer: string }[] };
		expect(errors[0]?.pointer).toMatch(/^#\/features\/1\/geometry\/coordinates/);
		expect((await ask(`${YARD}/bays/H-1`)).status).toBe(404);
	});

	test('all or nothing: one code that is taken takes all with it', async () => {
		const bays = [
			{ code: 'J-1', zone: 'J' },
			{ code: 'A-01', zone: 'J' }
		];
		const refused = await post(`${YARD}/bays`, bays);
		expect(refused.status).toBe(409);
		expect((await ask(`${YARD}/bays/J-1`)).status).toBe(404);
		expect(await rows("SELECT id FROM zone WHERE code = 'J'")).toEqual([]);
	});
});

describe('Idempotency-Key', () => {
	const body = [{ code: 'K-1', zone: 'K' }];
	const named = (key: string) => ({ 'idempotency-key': key });

	test('the same key and body give the same answer, and it is done once', async () => {
		const first = await post(`${YARD}/bays`, body, named('one'));
		const again = await post(`${YARD}/bays`, body, named('one'));
		expect([first.status, again.status]).toEqual([201, 201]);
		expect(again.text).toBe(first.text);
		expect(again.headers.location).toBe(first.headers.location);
		expect(await rows("SELECT id FROM bay WHERE code = 'K-1'")).toHaveLength(1);
	});

	test('another body under the same key is a conflict', async () => {
		const other = await post(`${YARD}/bays`, [{ code: 'K-2', zone: 'K' }], named('one'));
		expect(other.status).toBe(409);
		expect((await ask(`${YARD}/bays/K-2`)).status).toBe(404);
	});

	test('twenty at once are one', async () => {
		const many = await Promise.all(
			Array.from(
				{ length: 20 },
				async () => await post(`${YARD}/bays`, [{ code: 'K-3', zone: 'K' }], named('many'))
			)
		);
		expect(new Set(many.map((a) => a.status))).toEqual(new Set([201]));
		expect(new Set(many.map((a) => a.text)).size).toBe(1);
		expect(await rows("SELECT id FROM bay WHERE code = 'K-3'")).toHaveLength(1);
	});

	test('a refused write is not remembered: put right, it goes through', async () => {
		const taken = [{ code: 'A-01', zone: 'A' }];
		expect((await post(`${YARD}/bays`, taken, named('retry'))).status).toBe(409);
		await ask(`${YARD}/bays/K-1`, { method: 'DELETE' });
		expect((await post(`${YARD}/bays`, body, named('retry'))).status).toBe(201);
	});

	test('keys of different callers are different keys', async () => {
		const other = await room.asking();
		const mine = await other(`${YARD}/bays`, {
			method: 'POST',
			body: [{ code: 'K-4', zone: 'K' }],
			headers: named('one')
		});
		expect(mine.status).toBe(201);
	});

	test('what is kept of an answer that shows a node key is sealed', async () => {
		const wanted = [{ serial: 'IDEM-0001', profile: 'amr-18-16384' }];
		const first = await post(`${YARD}/nodes`, wanted, named('secret'));
		expect(first.status).toBe(201);
		const { items } = first.json() as { items: { key: string; mqttPassword: string }[] };
		const kept = await rows("SELECT answer_sealed FROM idempotency WHERE idem_key = 'secret'");
		const bytes = (kept[0]?.['answer_sealed'] as Buffer).toString('latin1');
		expect(bytes).not.toContain(items[0]!.key);
		expect((await post(`${YARD}/nodes`, wanted, named('secret'))).text).toBe(first.text);
	});

	test('after 24 h a key may be used anew', async () => {
		await room.store.pool.query(
			"UPDATE idempotency SET created_at_ms = created_at_ms - 86400001 WHERE idem_key = 'many'"
		);
		const anew = await post(`${YARD}/bays`, [{ code: 'K-5', zone: 'K' }], named('many'));
		expect(anew.status).toBe(201);
	});

	test('a key that no header may hold is refused', async () => {
		expect((await post(`${YARD}/bays`, body, named('x'.repeat(129)))).status).toBe(400);
	});
});

describe('nodes', () => {
	// The key and password of protocol.md, 'Test vector'.
	const KEY = Buffer.from(Array.from({ length: 32 }, (_, i) => i)).toString('hex');
	const PASSWORD = '3498d033a6b45a25fe69931b400415720e4b621acb9f061b306fa083cd8677df';

	test('a node made with a key has the MQTT password of the protocol, stored as a hash', async () => {
		const made = await post(`${YARD}/nodes`, [
			{ serial: 'TEST-0001', profile: 'amr-18-16384', key: KEY }
		]);
		expect(made.status).toBe(201);
		expect(made.headers['cache-control']).toBe('no-store');
		expect(made.json()).toEqual({
			items: [{ serial: 'TEST-0001', key: KEY, mqttPassword: PASSWORD }]
		});
		const [row] = await rows("SELECT * FROM node WHERE serial = 'TEST-0001'");
		const sha256 = createHash('sha256').update(PASSWORD).digest();
		expect(row?.['mqtt_hash']).toEqual(sha256);
		const opened = createSecret(TEST_SECRET).open(
			'node key',
			Number(row?.['id']),
			row?.['key_sealed'] as Buffer
		);
		expect(opened.ok && opened.bytes.toString('hex')).toBe(KEY);
		const shown = (await ask('/api/v1/nodes/TEST-0001')).text;
		expect(shown).not.toContain(KEY);
		expect(shown).not.toContain(PASSWORD);
	});

	test('without a key one is made; no two are the same', async () => {
		const made = await post(`${YARD}/nodes`, [
			{ serial: 'TEST-0002', profile: 'amr-16-4096' },
			{ serial: 'TEST-0003', profile: 'amr-16-4096' }
		]);
		const { items } = made.json() as { items: { key: string; mqttPassword: string }[] };
		expect(items[0]?.key).not.toBe(items[1]?.key);
		for (const { key, mqttPassword: said } of items) {
			expect(mqttPassword(Buffer.from(key, 'hex'))).toBe(said);
		}
	});

	test.each([
		['a serial that is registered', { serial: 'SEED-A-01', profile: 'amr-18-16384' }, 409],
		['a profile that is not there', { serial: 'TEST-0009', profile: 'nonsense' }, 422],
		['a bay that is not there', { serial: 'TEST-0009', profile: 'amr-18-16384', bay: 'Z-1' }, 422],
		['a bay that has a node', { serial: 'TEST-0009', profile: 'amr-18-16384', bay: 'A-02' }, 409],
		['a serial of the wrong form', { serial: 'test', profile: 'amr-18-16384' }, 400],
		['a key that is too short', { serial: 'TEST-0009', profile: 'amr-18-16384', key: 'ff' }, 400]
	])('%s is refused, all or nothing', async (_, node, status) => {
		const good = { serial: 'TEST-0008', profile: 'amr-18-16384' };
		expect((await post(`${YARD}/nodes`, [good, node])).status).toBe(status);
		expect((await ask('/api/v1/nodes/TEST-0008')).status).toBe(404);
	});

	test('a new key leaves the old one in force for the overlap', async () => {
		const made = await post('/api/v1/nodes/TEST-0001/key', { overlapS: 3600 });
		expect(made.status).toBe(200);
		const { oldKeyUntil, mqttPassword: fresh } = made.json() as Record<string, string>;
		expect(Date.parse(oldKeyUntil!) - Date.now()).toBeGreaterThan(3_500_000);
		const [row] = await rows("SELECT * FROM node WHERE serial = 'TEST-0001'");
		expect(row?.['mqtt_hash_prev']).toEqual(createHash('sha256').update(PASSWORD).digest());
		expect(row?.['mqtt_hash']).toEqual(createHash('sha256').update(fresh!).digest());
	});

	test('a node is placed, described and withdrawn; each act is recorded with who did it', async () => {
		await post(`${YARD}/bays`, [{ code: 'N-1', zone: 'N' }]);
		const placed = await post('/api/v1/nodes/TEST-0002/place', { bay: 'N-1' });
		expect(placed.json()).toMatchObject({ outcome: 'done' });
		expect((await ask('/api/v1/nodes/TEST-0002')).json()).toMatchObject({
			bay: 'N-1',
			condition: 'learning'
		});
		const taken = await post('/api/v1/nodes/TEST-0003/place', { bay: 'N-1' });
		expect(taken.status).toBe(409);
		const busy = await ask(`${YARD}/bays/N-1`, { method: 'DELETE' });
		expect(busy.status).toBe(409);
		const patch = { method: 'PATCH', body: { headingDeg: 90, gateway: 'gw-1' } };
		expect((await ask('/api/v1/nodes/TEST-0002', patch)).json()).toMatchObject({
			headingDeg: 90,
			gateway: 'gw-1'
		});
		const gone = await post('/api/v1/nodes/TEST-0002/withdraw', { reason: 'flat cell' });
		expect(gone.json()).toMatchObject({ outcome: 'done' });
		expect((await ask('/api/v1/nodes/TEST-0002')).json()).toMatchObject({
			condition: 'withdrawn',
			bay: null
		});
		const acts = await rows(
			"SELECT a.kind, a.by_actor, a.why FROM act a JOIN node n ON n.id = a.node_id WHERE n.serial = 'TEST-0002' ORDER BY a.id"
		);
		expect(acts.map((a) => a['kind'] as string)).toEqual(['place', 'parameters', 'withdraw']);
		expect(acts[2]?.['why']).toBe('flat cell');
		for (const act of acts) expect(act['by_actor']).toMatch(/^key:\d+$/);
	});
});

describe('settling and closing', () => {
	test('a bay without a node has nothing to settle', async () => {
		const path = '/api/v1/sites/far-shed/bays/S-2/settle';
		expect((await post(path, { as: 'seen_vacant' })).status).toBe(422);
	});

	test('a look that is yet to come, or a day old, settles nothing', async () => {
		const settle = async (agoMs: number) =>
			await post(`${YARD}/bays/A-09/settle`, {
				as: 'seen_vacant',
				at: new Date(Date.now() - agoMs).toISOString()
			});
		expect((await settle(-120_000)).status).toBe(422);
		expect((await settle(25 * 3_600_000)).status).toBe(422);
	});

	test('settling writes an act, and the answer is what came of it', async () => {
		const settled = await post(`${YARD}/bays/A-09/settle`, { as: 'seen_vacant' });
		expect([200, 202, 422]).toContain(settled.status);
		const [act] = await rows("SELECT * FROM act WHERE kind = 'settle'");
		expect(act).toMatchObject({ bay_id: room.seeded.bays['A-09'], args: '{"as":"seen_vacant"}' });
	});

	test('a zone is closed for a time: each bay says so, counts as closed and nothing else', async () => {
		const from = new Date(Date.now() - 1000).toISOString();
		const to = new Date(Date.now() + 3_600_000).toISOString();
		const before = (await ask(`${YARD}/bays`)).json() as { changes: number };
		const closed = await post(`${YARD}/closures`, { zone: 'B', from, to, reason: 'kerb works' });
		expect(closed.status).toBe(201);
		expect((closed.json() as { items: unknown[] }).items).toHaveLength(8);
		expect((await ask(`${YARD}/bays/B-03`)).json()).toMatchObject({
			closed: { from, to, reason: 'kerb works' }
		});
		const site = (await ask(YARD)).json() as {
			zones: { code: string; counts: Record<string, number> }[];
		};
		expect(site.zones.find((z) => z.code === 'B')?.counts).toMatchObject({
			...{ bays: 8, closed: 8, occupied: 0, vacant: 0, unknown: 0 }
		});
		const poll = (await ask(`${YARD}/bays?changes=${before.changes}`)).json() as {
			items: { code: string }[];
		};
		expect(poll.items.map((bay) => bay.code).sort()).toEqual(
			Array.from({ length: 8 }, (_, i) => `B-0${i + 1}`)
		);
		const list = (await ask(`${YARD}/closures`)).json() as { items: unknown[] };
		expect(list.items).toHaveLength(8);
		const twice = await post(`${YARD}/closures`, { bays: ['B-01'], from, to, reason: 'again' });
		expect(twice.status).toBe(409);
	});

	const soon = (ms: number) => new Date(Date.now() + ms).toISOString();
	test.each([
		['both bays and a zone', { bays: ['A-01'], zone: 'A' }, 400],
		['neither', {}, 400],
		['a bay that is not there', { bays: ['A-01', 'Z-9'] }, 422],
		['a zone that is not there', { zone: 'Z' }, 422],
		['an end before its begin', { zone: 'A', to: soon(-7_200_000) }, 400],
		['one that is over', { zone: 'A', from: soon(-7_200_000), to: soon(-3_600_000) }, 422]
	])('%s closes nothing', async (_, part, status) => {
		const base = { from: soon(0), to: soon(3_600_000), reason: 'test' };
		const before = await rows('SELECT COUNT(*) AS n FROM closure');
		expect((await post(`${YARD}/closures`, { ...base, ...part })).status).toBe(status);
		expect(await rows('SELECT COUNT(*) AS n FROM closure')).toEqual(before);
	});
});
