import { randomUUID } from 'node:crypto';
import { readdirSync } from 'node:fs';
import { join } from 'node:path';
import sharp from 'sharp';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { keepVisits } from '$lib/server/visits/keep';
import { openRoom, type Room } from '../support/api-room';
import type { TestApp } from '../support/app';
import { NoticeRoom, showCondition } from '../support/notices';

const HOUR = 3_600_000;
const DAY = 24 * HOUR;

/* Issue 6, 'Visits', and product.md, 'Cautions' (names 90 days, photos without position). */
describe('requests by rule', () => {
	const T0 = Date.parse('2026-12-01T10:00:00Z');
	let room: NoticeRoom;
	beforeAll(async () => {
		room = await NoticeRoom.open();
		await room.rows('UPDATE node_fast SET heard_at_ms = ?', [T0]);
	});
	afterAll(async () => {
		await room.close();
	});
	const asked = async (bay: string) =>
		await room.rows<{ cause: string; over: number; ended: number | null; outcome: string | null }>(
			`SELECT c.cause, c.ended_at_ms IS NOT NULL AS 'over', r.ended_at_ms AS ended, r.outcome
			 FROM visit_request r JOIN visit_cause c ON c.request_id = r.id JOIN bay b ON b.id = r.bay_id
			 WHERE b.code = ? ORDER BY c.id`,
			[bay]
		);
	const heard = async (nowMs: number, but = '') =>
		await room.rows(
			`UPDATE node_fast SET heard_at_ms = ? WHERE node_id NOT IN
				(SELECT n.id FROM node n JOIN bay b ON b.id = n.bay_id WHERE b.code = ?)`,
			[nowMs, but]
		);

	test('a low cell sends somebody at once, a clipped bay after a day, as one request a bay', async () => {
		await showCondition(room, 'B-02', { condition: 'clipped', also: 'low_cell' }, T0);
		await room.look(T0);
		expect(await asked('B-02')).toMatchObject([{ cause: 'low_cell', over: 0 }]);
		await heard(T0 + 25 * HOUR);
		await room.look(T0 + 25 * HOUR);
		await room.look(T0 + 25 * HOUR + 40_000);
		expect((await asked('B-02')).map(({ cause }) => cause)).toEqual(['low_cell', 'clipped']);
		expect(
			await room.rows(
				'SELECT COUNT(*) AS n FROM visit_request r JOIN bay b ON b.id = r.bay_id WHERE b.code = ?',
				['B-02']
			)
		).toEqual([{ n: 1 }]);
	});

	test('what heals by itself takes its request back, unless somebody has it', async () => {
		const at = T0 + 26 * HOUR;
		await showCondition(room, 'A-01', { condition: 'in_service', also: 'low_cell' }, at);
		await showCondition(room, 'A-02', { condition: 'in_service', also: 'low_cell' }, at);
		await heard(at);
		await room.look(at);
		await room.rows(`UPDATE visit_request SET taken_by = ? WHERE bay_id = ?`, [
			room.seeded.people.maintenance,
			room.seeded.bays['A-02']
		]);
		for (const bay of ['A-01', 'A-02'])
			await showCondition(room, bay, { condition: 'in_service' }, at + 60_000);
		await heard(at + 60_000);
		await room.look(at + 60_000);
		expect(await asked('A-01')).toMatchObject([{ over: 1, outcome: 'healed by itself' }]);
		expect(await asked('A-02')).toMatchObject([{ over: 1, ended: null }]);
	});
});

describe('walks', () => {
	let room: Room;
	let fitter: Awaited<ReturnType<TestApp['signIn']>>;
	let admin: typeof fitter;
	let visit: number;
	const SITE = '/api/desk/sites/tallow-yard';
	const rows = async <T>(text: string, values: unknown[] = []): Promise<T[]> => {
		const [found] = await room.store.pool.query(text, values);
		return found as T[];
	};
	const ask = async (bay: string) =>
		(
			await fitter(`${SITE}/requests`, { method: 'POST', body: { bay, reason: `look at ${bay}` } })
		).json()['id'] as number;
	interface Stop {
		id: number;
		place: number;
		bay: string;
		ticks: Record<string, boolean>;
		photos: { id: string }[];
		additions: { text: string; by: string | null }[];
		outcome: string | null;
	}
	const walkOf = async (who = fitter) =>
		(await who(`${SITE}/visits/${visit}`)).json() as unknown as {
			stops: Stop[];
			endedAtMs: number;
		};
	const stopOf = async (bay: string) => (await walkOf()).stops.find((stop) => stop.bay === bay)!;
	const put = async (who: typeof fitter, id: string, body: unknown) =>
		await who(`${SITE}/visits/${visit}/recordings/${id}`, { method: 'PUT', body });

	beforeAll(async () => {
		room = await openRoom();
		fitter = await room.app.signIn(room.seeded.emails.maintenance);
		admin = await room.app.signIn(room.seeded.emails.admin);
	});
	afterAll(async () => {
		await room.close();
	});
	const me = () => room.seeded.people.maintenance;
	const boss = () => room.seeded.people.admin;

	test('an operator asks and takes nothing; an integrator sees nothing', async () => {
		const operator = await room.app.signIn(room.seeded.emails.operator);
		const integrator = await room.app.signIn(room.seeded.emails.integrator);
		const body = { bay: 'A-12', reason: 'odd' };
		const made = await operator(`${SITE}/requests`, { method: 'POST', body });
		expect(made.status).toBe(201);
		const take = { method: 'POST', body: { requests: [made.json()['id']] } };
		expect((await operator(`${SITE}/visits`, take)).status).toBe(403);
		expect((await integrator(`${SITE}/requests`)).json()['items']).toEqual([]);
		expect((await integrator('/sites/tallow-yard/visits')).status).toBe(403);
		expect((await operator('/sites/tallow-yard/visits')).status).toBe(200);
		expect((await operator('/sites/tallow-yard/sent-for')).status).toBe(308);
	});

	test('several are taken into one walk, in the order of a short way; who comes second gets none', async () => {
		const ids = [];
		for (const bay of ['A-11', 'A-01', 'A-06', 'A-03']) ids.push(await ask(bay));
		const body = { requests: ids };
		const taken = (await fitter(`${SITE}/visits`, { method: 'POST', body })).json();
		expect(taken).toMatchObject({ taken: 4, left: 0 });
		visit = taken['visit'] as number;
		// One row, 2.5 m a bay: from one end to the other.
		const order = (await walkOf()).stops.map(({ bay }) => bay);
		expect([order, [...order].reverse()]).toContainEqual(['A-01', 'A-03', 'A-06', 'A-11']);
		expect((await admin(`${SITE}/visits`, { method: 'POST', body })).status).toBe(409);
	});

	test('a recording sent three times, two of them at once, is one', async () => {
		const stop = await stopOf('A-01');
		const id = randomUUID();
		const body = {
			...{ stop: stop.id, by: me(), madeAtMs: Date.now(), kind: 'tick' },
			...{ code: 'node_found', done: true }
		};
		const answers = await Promise.all([put(fitter, id, body), put(fitter, id, body)]);
		answers.push(await put(fitter, id, body));
		expect(answers.map(({ status }) => status)).toEqual([200, 200, 200]);
		expect(answers.filter((a) => a.json()['again'] === false)).toHaveLength(1);
		expect(await rows('SELECT id FROM visit_recording WHERE stop_id = ?', [stop.id])).toEqual([
			{ id }
		]);
		expect((await stopOf('A-01')).ticks).toEqual({ node_found: true });
		const other = { ...body, kind: 'note', text: 'x', code: undefined, done: undefined };
		expect((await put(fitter, id, other)).status).toBe(409);
	});

	test("what one person recorded is never taken as another's", async () => {
		const stop = await stopOf('A-01');
		const body = { stop: stop.id, by: me(), madeAtMs: 1, kind: 'note', text: 'mine' };
		const refused = await put(admin, randomUUID(), body);
		expect(refused.status).toBe(403);
		expect(refused.json()['detail']).toContain('waits until they sign in');
		expect((await put(fitter, randomUUID(), body)).json()).toMatchObject({ verdict: 'taken' });
	});

	test('what is not right is refused with field and cure', async () => {
		const stop = await stopOf('A-01');
		const base = { stop: stop.id, by: me(), madeAtMs: 1 };
		const tick = { ...base, kind: 'tick', done: true };
		expect((await put(fitter, randomUUID(), { ...tick, code: 'cell_changed' })).status).toBe(422);
		expect((await put(fitter, randomUUID(), { ...tick, code: 'dance' })).status).toBe(400);
		expect((await put(fitter, 'no-uuid', { ...tick, code: 'node_found' })).status).toBe(400);
		const lost = { ...tick, stop: 999_999, code: 'node_found' };
		expect((await put(fitter, randomUUID(), lost)).status).toBe(404);
		const other = { ...base, kind: 'outcome', code: 'other', text: '' };
		const refused = await put(fitter, randomUUID(), other);
		expect(refused.status).toBe(400);
		expect(JSON.stringify(refused.json())).toContain('say in words');
	});

	const photo = async () =>
		await sharp({ create: { width: 60, height: 40, channels: 3, background: '#888' } })
			.withExif({ IFD0: { Make: 'Secretmaker' }, IFD3: { GPSLatitude: '47/1 37/1 12/1' } })
			.jpeg()
			.toBuffer();
	const send = async (stop: number, id: string, bytes: Buffer, by = me(), who = fitter) =>
		await who(`${SITE}/visits/${visit}/photos/${id}?stop=${stop}&by=${by}&at=${Date.now()}`, {
			...{ method: 'PUT', body: bytes },
			headers: { 'content-type': 'image/jpeg' }
		});

	test('a photo is kept once, without its notes, and shown only within reach', async () => {
		const stop = await stopOf('A-01');
		const [id, bytes] = [randomUUID(), await photo()];
		expect((await send(stop.id, id, bytes)).json()).toMatchObject({
			verdict: 'taken',
			again: false
		});
		expect((await send(stop.id, id, bytes)).json()).toMatchObject({ again: true });
		const other = Buffer.concat([bytes, Buffer.from('x')]);
		expect((await send(stop.id, id, other)).status).toBe(409);
		expect((await stopOf('A-01')).photos.map((p) => p.id)).toEqual([id]);
		const path = `${SITE}/visits/${visit}/photos/${id}`;
		for (const shown of [await fitter(path), await admin(`${path}/thumb`)]) {
			expect(shown.status).toBe(200);
			expect(shown.headers).toMatchObject({
				...{ 'content-type': 'image/jpeg', 'x-content-type-options': 'nosniff' },
				...{ 'cache-control': 'private, no-store' }
			});
			expect(shown.headers['content-security-policy']).toContain("default-src 'none'");
			expect(shown.bytes.includes('Secretmaker')).toBe(false);
			expect((await sharp(shown.bytes).metadata()).exif).toBeUndefined();
		}
		expect((await room.app.ask(path)).status).toBe(401);
		expect((await fitter(path.replace('tallow-yard', 'far-shed'))).status).toBe(404);
		const operator = await room.app.signIn(room.seeded.emails.operator);
		expect((await operator(path)).status).toBe(403);
	});

	test('what is no photo, or too large, is refused and leaves no file', async () => {
		const stop = await stopOf('A-01');
		const text = Buffer.from('<svg xmlns="http://www.w3.org/2000/svg"/>');
		expect((await send(stop.id, randomUUID(), text)).status).toBe(415);
		const large = Buffer.alloc(12_000_001);
		expect((await send(stop.id, randomUUID(), large)).status).toBe(413);
		expect((await send(stop.id, randomUUID(), await photo(), boss())).status).toBe(403);
		expect(await rows('SELECT COUNT(*) AS n FROM visit_photo')).toEqual([{ n: 1 }]);
	});

	const opened = async (bay: string, kinds: string, awaitsProof: boolean) => {
		await rows(
			`INSERT INTO notice (site_id, node_id, bay_id, subject, about, kind, kinds, awaits_proof, since_ms,
				opened_at_ms, deadline_ms, facts)
			 SELECT b.site_id, n.id, b.id, CONCAT('node:', n.id), CONCAT('node:', n.id), ?, ?, ?, 1, 1, 1, '{}'
			 FROM bay b JOIN node n ON n.bay_id = b.id WHERE b.code = ?
			 ON DUPLICATE KEY UPDATE kind = VALUES(kind), kinds = VALUES(kinds), awaits_proof = VALUES(awaits_proof)`,
			[kinds.split(',')[0], kinds, awaitsProof, bay]
		);
	};
	const noticeOf = async (bay: string) =>
		(
			await rows<{ closedHow: string | null; said: string }>(
				`SELECT t.closed_how AS closedHow, (SELECT GROUP_CONCAT(e.detail) FROM notice_entry e WHERE e.notice_id = t.id) AS said
				 FROM notice t JOIN bay b ON b.id = t.bay_id WHERE b.code = ? ORDER BY t.id DESC LIMIT 1`,
				[bay]
			)
		)[0];
	const close = async (bay: string, code: string, text = '', who = fitter, by = me()) => {
		const stop = await stopOf(bay);
		const body = { stop: stop.id, by, madeAtMs: Date.now(), kind: 'outcome', code, text };
		return (await put(who, randomUUID(), body)).json();
	};

	test('closing a stop ends its request and settles its notices; a film refresh due waits for its proof', async () => {
		await opened('A-01', 'low_cell', false);
		await opened('A-03', 'refresh_due', true);
		expect(await close('A-01', 'cell_changed', '3,65 V')).toMatchObject({ verdict: 'taken' });
		expect(await noticeOf('A-01')).toMatchObject({ closedHow: 'visit' });
		expect((await noticeOf('A-01'))?.said).toContain('cell changed: 3,65 V');
		await close('A-03', 'nothing_found');
		expect(await noticeOf('A-03')).toMatchObject({ closedHow: null });
		expect((await noticeOf('A-03'))?.said).toContain('nothing found');
		const open = (await fitter(`${SITE}/requests`)).json()['items'] as { bay: string }[];
		expect(
			open
				.map(({ bay }) => bay)
				.filter((bay) => bay.startsWith('A-'))
				.sort()
		).toEqual(['A-06', 'A-11', 'A-12']);
		const line = (await fitter(`${SITE}/bays/A-01/timeline`)).json()['items'] as {
			what: string;
			by: string;
			detail: { outcome: string };
		}[];
		expect(line.find(({ what }) => what === 'visit')).toMatchObject({
			...{ by: 'you', detail: { outcome: 'cell_changed' } }
		});
	});

	test('a stop closed by somebody else meanwhile keeps what comes later as an addition', async () => {
		expect(await close('A-06', 'nothing_found', '', admin, boss())).toMatchObject({
			verdict: 'taken'
		});
		expect(await close('A-06', 'cured', 'mine, from the street')).toMatchObject({
			verdict: 'added'
		});
		const stop = await stopOf('A-06');
		expect(stop.outcome).toBe('nothing_found');
		expect(stop.additions).toMatchObject([{ text: 'mine, from the street', by: 'Mads Tense' }]);
		const late = { stop: stop.id, by: me(), madeAtMs: 1, kind: 'note', text: 'and a note' };
		expect((await put(fitter, randomUUID(), late)).json()).toMatchObject({ verdict: 'added' });
		expect((await send(stop.id, randomUUID(), await photo())).json()).toMatchObject({
			verdict: 'added'
		});
	});

	test('a node that is to be swapped stays on the list with that cause, and the walk ends with its last stop', async () => {
		await close('A-11', 'to_be_swapped', 'cracked');
		const causes = await rows<{ cause: string }>(
			`SELECT c.cause FROM visit_cause c JOIN visit_request r ON r.id = c.request_id JOIN bay b ON b.id = r.bay_id
			 WHERE b.code = 'A-11' AND r.ended_at_ms IS NULL AND r.taken_by IS NULL ORDER BY c.id`
		);
		expect(causes.map(({ cause }) => cause)).toEqual(['by_hand', 'swap']);
		expect((await walkOf()).endedAtMs).not.toBeNull();
	});

	test('a walk that is ended gives back what was not seen to', async () => {
		const id = (
			await rows<{ id: number }>(
				"SELECT r.id FROM visit_request r JOIN bay b ON b.id = r.bay_id WHERE b.code = 'A-12'"
			)
		)[0]?.id;
		const taken = (
			await admin(`${SITE}/visits`, { method: 'POST', body: { requests: [id] } })
		).json();
		const end = `${SITE}/visits/${String(taken['visit'])}/end`;
		expect((await fitter(end, { method: 'POST', body: {} })).status).toBe(403);
		expect((await admin(end, { method: 'POST', body: {} })).status).toBe(204);
		expect(
			await rows('SELECT taken_by AS t, ended_at_ms AS e FROM visit_request WHERE id = ?', [id])
		).toEqual([{ t: null, e: null }]);
	});

	test('access notes: keys and contact only for those who go there; two writers, the second is told', async () => {
		const notes = {
			...{ parking: 'by the gate', wayIn: '', keysAt: 'with the porter', contact: 'N. Oone' },
			permits: [{ name: 'works', number: '7', lastDay: '2020-02-29' }]
		};
		const save = async (version: number, more: object = {}) =>
			(
				await fitter(`${SITE}/visits/access`, {
					...{ method: 'PUT', body: { ...notes, version, ...more } }
				})
			).status;
		expect(await save(0)).toBe(204);
		expect(await save(0)).toBe(409);
		expect(await save(1, { permits: [{ name: 'x', number: '', lastDay: '2026-02-31' }] })).toBe(
			400
		);
		const operator = await room.app.signIn(room.seeded.emails.operator);
		const seen = await operator('/sites/tallow-yard/visits');
		expect(seen.text).toContain('by the gate');
		expect(seen.text).toContain('ended on 2020-02-29');
		expect(seen.text).not.toMatch(/porter|Oone/);
		expect((await fitter('/sites/tallow-yard/visits')).text).toContain('with the porter');
	});

	test('each person has a key of their own for what waits in the browser', async () => {
		const key = async (who: typeof fitter) => (await who('/api/desk/visits/key')).json()['keys'];
		expect(await key(fitter)).toEqual(await key(fitter));
		expect(await key(fitter)).not.toEqual(await key(admin));
		const integrator = await room.app.signIn(room.seeded.emails.integrator);
		expect((await integrator('/api/desk/visits/key')).status).toBe(403);
	});

	test('after 90 days nobody is named, and photos go with the readings; their files too', async () => {
		const dataDir = join(import.meta.dirname, '../../.tmp', `app-${new URL(room.app.origin).port}`);
		const files = () => readdirSync(join(dataDir, 'photos'), { recursive: true }).map(String);
		expect(files().filter((name) => name.endsWith('.jpg'))).toHaveLength(4);
		const now = Date.now();
		expect(await keepVisits(room.database.url, dataDir, now + 89 * DAY)).toMatchObject({
			...{ namesDropped: 0, photosDropped: 0, orphans: 0 }
		});
		expect(
			(await keepVisits(room.database.url, dataDir, now + 91 * DAY)).namesDropped
		).toBeGreaterThan(5);
		const left = await rows(
			`SELECT (SELECT COUNT(*) FROM visit_recording WHERE person_id IS NOT NULL) AS a,
				(SELECT COUNT(*) FROM visit_stop WHERE ended_by IS NOT NULL) AS b,
				(SELECT COUNT(*) FROM visit_photo WHERE person_id IS NOT NULL) AS c,
				(SELECT COUNT(*) FROM visit_request WHERE ended_by IS NOT NULL) AS d,
				(SELECT COUNT(*) FROM visit WHERE taken_by IS NOT NULL) AS e`
		);
		expect(left).toEqual([{ a: 0, b: 0, c: 0, d: 0, e: 0 }]);
		// The seed's site keeps readings 400 days (schema default).
		expect(await keepVisits(room.database.url, dataDir, now + 401 * DAY)).toMatchObject({
			photosDropped: 2
		});
		expect(files().filter((name) => name.endsWith('.jpg'))).toEqual([]);
	});
});
