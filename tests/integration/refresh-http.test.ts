import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { makeToken } from '$lib/server/outbox/link-token';
import { createSecret } from '$lib/server/secret';
import { openRoom, type Room } from '../support/api-room';
import { TEST_SECRET } from '../support/app';

const DAY = 86_400_000;
let room: Room;
const secret = createSecret(TEST_SECRET);

beforeAll(async () => {
	room = await openRoom();
});
afterAll(async () => {
	await room.close();
});

const rows = async <T>(text: string, values: unknown[] = []): Promise<T[]> =>
	(await room.store.pool.query(text, values))[0] as T[];
const path = (bay: string) => `/api/v1/nodes/SEED-${bay}/refresh`;

describe('asking over the API', () => {
	test('the same request again is the same film refresh, another body under its key is refused', async () => {
		const ask = await room.asking({ scopes: ['refresh'] });
		const post = async (reason: string) =>
			await ask(path('A-04'), {
				method: 'POST',
				body: { reason },
				headers: { 'idempotency-key': 'one-and-the-same' }
			});
		const first = await post('low since the works');
		const again = await post('low since the works');
		expect([first.status, again.status]).toEqual([201, 201]);
		expect(again.json()).toEqual(first.json());
		expect(first.json()).toMatchObject({ state: 'asked', origin: 'key', bay: 'A-04' });
		expect((await post('another reason')).status).toBeGreaterThanOrEqual(400);
		expect(await rows('SELECT id FROM refresh')).toHaveLength(1);
		// Without the key it is a second order: one is open already.
		const plain = await ask(path('A-04'), { method: 'POST', body: { reason: 'x' } });
		expect(plain.status).toBe(409);
	});

	test('a key sees and asks as far as its scope and sites, and never approves', async () => {
		const other = await room.asking({ scopes: ['occupancy', 'telemetry'] });
		expect((await other('/api/v1/refreshes')).status).toBe(403);
		expect((await other(path('A-06'), { method: 'POST', body: {} })).status).toBe(403);
		const elsewhere = await room.asking({
			scopes: ['refresh'],
			sites: ['far-shed']
		});
		expect((await elsewhere('/api/v1/refreshes')).json()).toMatchObject({ items: [] });
		expect((await elsewhere('/api/v1/refreshes/1')).status).toBe(404);
		const own = await room.asking({ scopes: ['refresh'] });
		const list = (await own('/api/v1/refreshes')).json() as { items: { bay: string }[] };
		expect(list.items.map(({ bay }) => bay)).toEqual(['A-04']);
		const desk = '/api/desk/sites/tallow-yard/refreshes';
		expect((await own(desk)).status).toBeGreaterThanOrEqual(400);
		const approve = { method: 'POST', body: { deed: 'approve', anyHour: false } };
		expect((await own(`${desk}/1/decide`, approve)).status).toBeGreaterThanOrEqual(400);
	});

	test('an integrator’s session opens neither the sheet nor its routes; an operator asks and does not approve', async () => {
		const desk = '/api/desk/sites/tallow-yard/refreshes';
		const integrator = await room.app.signIn(room.seeded.emails.integrator);
		expect((await integrator('/sites/tallow-yard/refreshes')).status).toBe(403);
		expect((await integrator(desk)).status).toBe(403);
		const operator = await room.app.signIn(room.seeded.emails.operator);
		const asked = await operator(path('A-08'), { method: 'POST', body: { reason: 'x' } });
		expect(asked.status).toBe(201);
		const { id } = asked.json() as { id: number };
		const approve = { method: 'POST', body: { deed: 'approve', anyHour: true } };
		expect((await operator(`${desk}/${id}/decide`, approve)).status).toBe(403);
		const maintenance = await room.app.signIn(room.seeded.emails.maintenance);
		expect((await maintenance(`${desk}/${id}/decide`, approve)).status).toBe(200);
	});
});

describe('links of a mail, without a session', () => {
	const mailed = async (bay: string): Promise<number> => {
		const { sites, nodes, bays } = room.seeded;
		const values = [sites.yard, nodes[`SEED-${bay}`], bays[bay], `test:${bay}`, `test:${bay}`];
		const [row] = await rows<{ id: number }>(
			`INSERT INTO notice (site_id, node_id, bay_id, subject, about, kind, kinds, since_ms, opened_at_ms, deadline_ms, facts)
			 VALUES (?, ?, ?, ?, ?, 'clipped', 'clipped', 1, 1, 9999999999999, '{}') RETURNING id`,
			values
		);
		return row!.id;
	};
	const holder = async (id: number) =>
		(await rows<{ by: number | null }>('SELECT taken_by AS `by` FROM notice WHERE id = ?', [id]))[0]
			?.by;

	test('‘I take it’ shows what it is, changes nothing by being opened, and takes when confirmed', async () => {
		const { people } = room.seeded;
		const id = await mailed('A-10');
		const does = 'acknowledge' as const;
		const link = { does, personId: people.maintenance, noticeIds: [id] };
		const token = makeToken(secret, { ...link, expiresAtMs: Date.now() + DAY });
		const page = await room.app.ask(`/acknowledge?token=${token}`);
		expect(page.status).toBe(200);
		expect(page.text).toContain('Mads Tense, you take:');
		expect(page.text).toContain('A-10, Tallow Yard: clipped');
		expect(page.headers['referrer-policy']).toBe('no-referrer');
		expect(await holder(id)).toBeNull();
		const confirm = async (value: string) =>
			await room.app.ask('/acknowledge', {
				method: 'POST',
				headers: {
					...{ origin: room.app.origin, accept: 'text/html' },
					'content-type': 'application/x-www-form-urlencoded'
				},
				body: new URLSearchParams({ token: value }).toString()
			});
		expect((await confirm(`${token.slice(0, -4)}AAAA`)).text).toContain(
			'This link is not one of ours.'
		);
		const over = makeToken(secret, { ...link, expiresAtMs: Date.now() - 1 });
		expect((await confirm(over)).text).toContain('This link is over');
		expect(await holder(id)).toBeNull();
		expect((await confirm(token)).text).toContain('You have 1 notice now.');
		expect(await holder(id)).toBe(people.maintenance);
	});

	test('one click unsubscribes: a bare POST without Origin or cookie, from any mail program', async () => {
		const { people } = room.seeded;
		const token = makeToken(secret, { does: 'unsubscribe', personId: people.operator });
		const off = async () =>
			await rows('SELECT person_id FROM mail_setting WHERE off_at_ms IS NOT NULL');
		expect((await room.app.ask(`/unsubscribe?token=${token}`)).status).toBe(200);
		expect(await off()).toEqual([]);
		// RFC 8058, section 3.1: the body is List-Unsubscribe=One-Click.
		const click = async (value: string, headers: Record<string, string> = {}) =>
			await room.app.ask(`/unsubscribe?token=${value}`, {
				method: 'POST',
				headers: { 'content-type': 'application/x-www-form-urlencoded', ...headers },
				body: 'List-Unsubscribe=One-Click'
			});
		await click('A'.repeat(60));
		expect(await off()).toEqual([]);
		expect((await click(token)).status).toBe(200);
		expect(await off()).toEqual([{ person_id: people.operator }]);
		// From a page of a mail program's own, and a second time: the same.
		expect((await click(token, { origin: 'https://mail.example' })).status).toBe(200);
		expect(await off()).toHaveLength(1);
	});
});
