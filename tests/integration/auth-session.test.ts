import { afterAll, beforeAll, describe, expect, test, vi } from 'vitest';
import { createSecret } from '$lib/server/secret';
import { enqueueMail } from '$lib/server/outbox/enqueue';
import * as people from '$lib/server/store/queries/people';
import * as tickets from '$lib/server/store/queries/tickets';
import { tellOfOwnerless } from '$lib/server/auth/ownerless';
import { Sessions } from '$lib/server/auth/session';
import { newTicket } from '$lib/server/auth/ticket';
import { createLog } from '$lib/server/log';
import { TEST_SECRET, type TestApp } from '../support/app';
import { openRoom, type Room } from '../support/api-room';
import { openMailBox, type MailBox } from '../support/mail';
import { SEED_PASSWORD } from '../support/seed';

let room: Room;
let box: MailBox;
let origin: string;
const YARD = '/api/v1/sites/tallow-yard';

beforeAll(async () => {
	box = await openMailBox();
	room = await openRoom({
		SMTP_URL: box.url,
		MAIL_FROM: 'Lodekeep <keeper@lodekeep.example>',
		ADDRESS_HEADER: 'x-forwarded-for',
		LODEKEEP_METRICS_TOKEN: 'token-that-only-the-scraper-has'
	});
	origin = room.app.origin;
});
afterAll(async () => {
	await room.close();
	await box.close();
});

const FORM = { 'content-type': 'application/x-www-form-urlencoded', accept: 'text/html' };
const form = (fields: Record<string, string>) => new URLSearchParams(fields).toString();
let addresses = 0;
const newAddress = () => `203.0.113.${++addresses}`;

const trySignIn = async (
	email: string,
	password: string,
	headers: Record<string, string> = { 'x-forwarded-for': newAddress() }
) =>
	await room.app.ask('/sign-in', {
		method: 'POST',
		headers: { ...FORM, origin, ...headers },
		body: form({ email, password })
	});

describe('signing in', () => {
	test('the cookie is HttpOnly and SameSite=Lax, and holds no name and no address', async () => {
		const answer = await trySignIn(room.seeded.emails.operator, SEED_PASSWORD);
		expect(answer.status).toBe(303);
		const cookies = answer.headers['set-cookie']!;
		for (const name of ['lodekeep-session', 'lodekeep-device']) {
			const cookie = cookies.find((line) => line.startsWith(`${name}=`))!;
			expect(cookie).toMatch(/; HttpOnly/i);
			expect(cookie).toMatch(/; SameSite=Lax/i);
			expect(cookie).toMatch(/; Path=\//i);
			// Over plain HTTP on loopback; with an https ORIGIN see 'behind https'.
			expect(cookie).not.toMatch(/; Secure/i);
		}
	});

	test('a wrong password and an unknown address are answered alike', async () => {
		const wrong = await trySignIn(room.seeded.emails.operator, 'something else');
		const unknown = await trySignIn('nobody@lodekeep.example', 'something else');
		expect([wrong.status, unknown.status]).toEqual([400, 400]);
		expect(wrong.headers['set-cookie']).toBeUndefined();
		const words = (text: string) => /This address[^<]*/.exec(text)?.[0];
		expect(words(wrong.text)).toBeDefined();
		expect(words(wrong.text)).toBe(words(unknown.text));
	});

	test('the pages that come with the package are not there', async () => {
		for (const path of [
			'signin',
			'signout',
			'error',
			'session',
			'csrf',
			'providers',
			'verify-request'
		]) {
			expect((await room.app.ask(`/auth/${path}`)).status).toBe(404);
		}
		const post = { method: 'POST', headers: { ...FORM, origin }, body: '' };
		expect((await room.app.ask('/auth/session', post)).status).toBe(404);
	});

	test('polling sets no cookie, nor does a 304', async () => {
		const ask = await signedIn('operator');
		const first = await ask(`${YARD}/bays`);
		const again = await ask(`${YARD}/bays`, { headers: { 'if-none-match': first.headers.etag! } });
		expect([first.status, again.status]).toEqual([200, 304]);
		expect(first.headers['set-cookie']).toBeUndefined();
		expect(again.headers['set-cookie']).toBeUndefined();
	});
});

test('a session in use is renewed on a page load once a day, and never by polling', async () => {
	const session = createSecret(TEST_SECRET).derive('session').toString('hex');
	const sessions = new Sessions({ secrets: [session], secure: false });
	const [row] = await people
		.reachRows(room.store.db)
		.then((rows) => rows.people.filter((p) => p.id === room.seeded.people.admin));
	vi.useFakeTimers({ toFake: ['Date'], now: Date.now() - 2 * 86_400_000 });
	const old = await sessions.issue(row!.id, row!.sessionVersion);
	vi.useRealTimers();
	const cookie = `lodekeep-session=${old}`;
	const polled = await room.app.ask('/api/v1/self', { headers: { cookie } });
	expect(polled.status).toBe(200);
	expect(polled.headers['set-cookie']).toBeUndefined();
	const page = await room.app.ask('/sites', { headers: { cookie, accept: 'text/html' } });
	const fresh = page.cookies['lodekeep-session'];
	expect(fresh).toBeDefined();
	expect(fresh).not.toBe(old);
	const again = { cookie: `lodekeep-session=${fresh}`, accept: 'text/html' };
	expect((await room.app.ask('/sites', { headers: again })).cookies).toEqual({});
});

const signedIn = async (who: keyof Room['seeded']['emails']) =>
	await room.app.signIn(room.seeded.emails[who]);

describe('throttling sits in authorize', () => {
	const callback = async (address: string, email: string, password = 'a guess that is wrong') =>
		await room.app.ask('/auth/callback/credentials', {
			method: 'POST',
			headers: { ...FORM, origin, 'x-forwarded-for': address },
			body: form({ email, password })
		});

	test('also for who goes around the form: the sixth guess is not tried', async () => {
		const address = newAddress();
		const { maintenance } = room.seeded.emails;
		const codes: (string | null)[] = [];
		for (let i = 0; i < 6; i++) {
			const answer = await callback(address, maintenance);
			codes.push(new URL(answer.headers.location!).searchParams.get('code'));
		}
		expect(codes).toEqual([...Array<string>(5).fill('credentials'), 'throttled']);
		const right = await callback(address, maintenance, SEED_PASSWORD);
		expect(right.cookies['lodekeep-session']).toBeUndefined();
		const page = await trySignIn(maintenance, SEED_PASSWORD, { 'x-forwarded-for': address });
		expect(page.status).toBe(429);
	});

	test('and the person signs in from elsewhere all the same', async () => {
		const { maintenance } = room.seeded.emails;
		expect((await trySignIn(maintenance, SEED_PASSWORD)).status).toBe(303);
	});

	test('a device that was signed in on before passes even from the flooded address', async () => {
		const address = newAddress();
		const { integrator } = room.seeded.emails;
		const first = await trySignIn(integrator, SEED_PASSWORD, { 'x-forwarded-for': address });
		const device = `lodekeep-device=${first.cookies['lodekeep-device']}`;
		for (let i = 0; i < 25; i++) await callback(address, integrator);
		const stranger = await trySignIn(integrator, SEED_PASSWORD, { 'x-forwarded-for': address });
		expect(stranger.status).toBe(429);
		const known = { 'x-forwarded-for': address, cookie: device };
		expect((await trySignIn(integrator, SEED_PASSWORD, known)).status).toBe(303);
	});

	test('a right password over the callback route gives a session too', async () => {
		const answer = await callback(newAddress(), room.seeded.emails.admin, SEED_PASSWORD);
		expect(answer.cookies['lodekeep-session']).toBeDefined();
	});
});

describe('requests from elsewhere', () => {
	const body = { from: '2030-01-01T00:00:00Z', to: '2030-01-02T00:00:00Z', reason: 'x', zone: 'Z' };
	const types = [
		'application/json',
		'text/plain',
		'application/x-www-form-urlencoded',
		'multipart/form-data; boundary=x',
		''
	];

	test.each(types)('a session with content type %j needs an Origin that is ours', async (type) => {
		const ask = await signedIn('operator');
		const send = async (from: string) => {
			const headers: Record<string, string> = { origin: from };
			if (type !== '') headers['content-type'] = type;
			return await ask(`${YARD}/closures`, { method: 'POST', headers, body: JSON.stringify(body) });
		};
		for (const from of ['https://other.example', 'null', origin.replace('http:', 'https:')]) {
			const answer = await send(from);
			expect(answer.status).toBe(403);
			expect(answer.headers['content-type']).toBe('application/problem+json');
		}
		// 422: understood, there is no zone Z; 415: not a type that is taken.
		expect((await send(origin)).status).toBe(type === 'application/json' ? 422 : 415);
	});

	test('a session without any Origin is refused too', async () => {
		const answer = await trySignIn(room.seeded.emails.operator, SEED_PASSWORD);
		const cookie = `lodekeep-session=${answer.cookies['lodekeep-session']}`;
		for (const method of ['POST', 'PATCH', 'PUT', 'DELETE']) {
			const sent = await room.app.ask(`${YARD}/closures`, { method, headers: { cookie } });
			expect(sent.status).toBe(403);
		}
	});

	test('nobody is signed in as somebody else from another site', async () => {
		const answer = await trySignIn(room.seeded.emails.operator, SEED_PASSWORD, {
			origin: 'https://other.example'
		});
		expect(answer.status).toBe(403);
	});

	test('Bearer is exempt and its cookies are not looked at', async () => {
		const key = await room.key({ scopes: ['occupancy'] });
		const admin = await trySignIn(room.seeded.emails.admin, SEED_PASSWORD);
		const cookie = `lodekeep-session=${admin.cookies['lodekeep-session']}`;
		const withBoth = room.app.withKey(key);
		const sent = await withBoth(`${YARD}/bays`, { method: 'POST', headers: { cookie }, body: [] });
		expect(sent.status).toBe(403);
		expect(sent.json()['detail']).toContain("'provision'");
		const bad = await room.app.ask('/api/v1/self', {
			headers: { cookie, authorization: 'Bearer nonsense' }
		});
		expect(bad.status).toBe(401);
	});
});

describe('the end of a session', () => {
	const until = async (ask: TestApp['ask'], status: number): Promise<number> => {
		const beganMs = performance.now();
		while (performance.now() - beganMs < 5_000) {
			if ((await ask('/api/v1/self')).status === status) return performance.now() - beganMs;
			await new Promise((go) => setTimeout(go, 20));
		}
		throw new Error(`it never became ${status}`);
	};

	test('switched off by another process, a person is out within a second', async () => {
		const ask = await signedIn('elsewhere');
		expect((await ask('/api/v1/self')).status).toBe(200);
		await people.switchOff(room.store.db, room.seeded.people.elsewhere, Date.now());
		expect(await until(ask, 401)).toBeLessThan(1_000);
		const denied = await trySignIn(room.seeded.emails.elsewhere, SEED_PASSWORD);
		expect(denied.status).toBe(400);
		await people.switchOn(room.store.db, room.seeded.people.elsewhere);
		expect((await ask('/api/v1/self')).status).toBe(401);
	});

	test('another role, another reach: the old sessions are over within a second', async () => {
		const ask = await signedIn('elsewhere');
		await people.setReach(room.store.db, room.seeded.people.elsewhere, {
			role: 'integrator',
			sites: [room.seeded.sites.yard]
		});
		expect(await until(ask, 401)).toBeLessThan(1_000);
		const anew = await signedIn('elsewhere');
		expect((await anew('/api/v1/self')).json()).toMatchObject({
			role: 'integrator',
			sites: ['tallow-yard']
		});
	});

	test('a revoked key is refused within a second', async () => {
		const ask = room.app.withKey(await room.key({ name: 'to be revoked' }));
		expect((await ask('/api/v1/self')).status).toBe(200);
		await room.store.pool.query(
			"UPDATE api_key SET revoked_at_ms = ? WHERE name = 'to be revoked'",
			[Date.now()]
		);
		expect(await until(ask, 401)).toBeLessThan(1_000);
	});

	test('an expired key is refused', async () => {
		const ask = room.app.withKey(await room.key({ expiresAtMs: Date.now() - 1 }));
		expect((await ask('/api/v1/self')).status).toBe(401);
	});

	test('signing out takes the cookie and what the browser kept', async () => {
		const ask = await signedIn('operator');
		const out = await ask('/sign-out', { method: 'POST', headers: FORM, body: '' });
		expect(out.status).toBe(303);
		expect(out.headers['clear-site-data']).toBe('"cache"');
		expect(out.headers['set-cookie']?.join()).toMatch(/lodekeep-session=;.*Max-Age=0/i);
	});
});

test('a generated password lets one do nothing but change it; changing it ends the other sessions', async () => {
	await room.store.pool.query('UPDATE person SET must_change_password = 1 WHERE id = ?', [
		room.seeded.people.integrator
	]);
	await new Promise((go) => setTimeout(go, 600));
	const ask = await signedIn('integrator');
	const other = await signedIn('integrator');
	expect((await ask('/')).headers.location).toBe('/password');
	expect((await ask('/api/v1/sites')).status).toBe(403);
	const change = async (password: string) =>
		await ask('/password', {
			method: 'POST',
			headers: FORM,
			body: form({ current: SEED_PASSWORD, password, again: password })
		});
	expect((await change('short')).status).toBe(400);
	expect((await change(SEED_PASSWORD)).status).toBe(400);
	const changed = await change('seven loud gates');
	expect(changed.status).toBe(303);
	expect((await other('/api/v1/self')).status).toBe(401);
	const cookie = `lodekeep-session=${changed.cookies['lodekeep-session']}`;
	const self = await room.app.ask('/api/v1/self', { headers: { cookie } });
	expect(self.status).toBe(200);
	expect((await room.app.ask('/api/v1/sites', { headers: { cookie } })).status).toBe(200);
});

describe('mail with one-time links', () => {
	const linkOf = (text: string) => new URL(/http:\/\/\S+/.exec(text)![0]);
	const take = async (path: string, ticket: string, password: string) =>
		await room.app.ask(path, {
			method: 'POST',
			headers: { ...FORM, origin },
			body: form({ ticket, password, again: password })
		});

	test('a forgotten password: the link works once, and every session before it ends', async () => {
		const before = await signedIn('operator');
		const { operator } = room.seeded.emails;
		const asked = await room.app.ask('/reset?/ask', {
			method: 'POST',
			headers: { ...FORM, origin, 'x-forwarded-for': newAddress() },
			body: form({ email: operator.toUpperCase() })
		});
		expect(asked.status).toBe(200);
		const mail = await box.next(operator, 'password');
		const link = linkOf(mail.text!);
		expect(link.origin).toBe(origin);
		const ticket = link.searchParams.get('ticket')!;
		const [stored] = await room.store.pool.query('SELECT HEX(hash) AS hash FROM ticket');
		expect(JSON.stringify(stored)).not.toContain(ticket);
		const taken = await take('/reset?/take', ticket, 'eleven soft stones');
		expect(taken.status).toBe(303);
		expect((await before('/api/v1/self')).status).toBe(401);
		expect((await take('/reset?/take', ticket, 'twelve hard stones')).status).toBe(410);
		expect((await trySignIn(operator, 'eleven soft stones')).status).toBe(303);
		expect((await trySignIn(operator, 'twelve hard stones')).status).toBe(400);
	});

	test('who has no account is told the same, and gets no mail', async () => {
		// Notices may mail the people of the site meanwhile.
		const resets = () => box.mails.filter(({ subject }) => subject?.includes('password') ?? false);
		const count = resets().length;
		const asked = await room.app.ask('/reset?/ask', {
			method: 'POST',
			headers: { ...FORM, origin, 'x-forwarded-for': newAddress() },
			body: form({ email: 'nobody@lodekeep.example' })
		});
		expect(asked.status).toBe(200);
		await new Promise((go) => setTimeout(go, 500));
		expect(resets()).toHaveLength(count);
		expect(JSON.stringify(box.mails.map(({ to }) => to))).not.toContain('nobody@');
	});

	test('an invitation that is over opens nothing', async () => {
		const { text, hash } = newTicket();
		const personId = room.seeded.people.admin;
		await tickets.create(
			room.store.db,
			{ hash, personId, purpose: 'invitation', expiresAtMs: Date.now() - 1 },
			Date.now() - 1000
		);
		expect((await take('/invitation', text, 'thirteen old coins')).status).toBe(410);
		expect((await take('/invitation', 'x'.repeat(43), 'thirteen old coins')).status).toBe(410);
	});

	test('a mail refused for now goes later, with the same Message-ID, and only once', async () => {
		box.refuse(1);
		const secret = createSecret(TEST_SECRET);
		const wanted = { to: 'later@lodekeep.example', subject: 'Later', text: 'hello', demo: false };
		for (let i = 0; i < 3; i++) {
			await enqueueMail(room.store.db, secret, { ...wanted, dedupeKey: 'one' }, Date.now());
		}
		const endMs = Date.now() + 10_000;
		const failed = async () => {
			const [rows] = await room.store.pool.query(
				'SELECT tries, last_error FROM outbox WHERE sent_at_ms IS NULL AND last_error IS NOT NULL'
			);
			return (rows as unknown[]).length;
		};
		while ((await failed()) === 0 && Date.now() < endMs) {
			await new Promise((go) => setTimeout(go, 50));
		}
		expect(await failed()).toBe(1);
		await room.store.pool.query('UPDATE outbox SET not_before_ms = 0 WHERE sent_at_ms IS NULL');
		await box.next('later@lodekeep.example', 'Later');
		await new Promise((go) => setTimeout(go, 300));
		expect(box.mails.filter((m) => m.subject === 'Later')).toHaveLength(1);
		const [kept] = await room.store.pool.query(
			'SELECT LENGTH(payload_sealed) AS n FROM outbox WHERE sent_at_ms IS NOT NULL'
		);
		expect(new Set((kept as { n: number }[]).map((row) => row.n))).toEqual(new Set([0]));
	});

	test('mail of the demo never leaves: without a catcher it stays', async () => {
		const secret = createSecret(TEST_SECRET);
		const wanted = { to: 'demo@lodekeep.example', subject: 'Demo', text: 'hello', demo: true };
		await enqueueMail(room.store.db, secret, wanted, Date.now());
		await new Promise((go) => setTimeout(go, 2_500));
		expect(box.mails.some((m) => m.subject === 'Demo')).toBe(false);
	});
});

test('when the maker of a key leaves, the key works on and each admin is told once', async () => {
	const { db } = room.store;
	const ask = room.app.withKey(
		await room.key({ name: 'display', makerId: room.seeded.people.maintenance })
	);
	await people.switchOff(db, room.seeded.people.maintenance, Date.now());
	const secret = createSecret(TEST_SECRET);
	const log = createLog({ part: 'test', level: 'silent' });
	const parts = { db, secret, log, wake: () => undefined };
	for (let i = 0; i < 2; i++) await tellOfOwnerless(parts, Date.now());
	const { admin } = room.seeded.emails;
	expect((await box.next(admin, 'without an owner')).text).toContain("'display'");
	await new Promise((go) => setTimeout(go, 300));
	expect(box.mails.filter((m) => m.subject?.includes('display') === true)).toHaveLength(1);
	expect((await ask('/api/v1/self')).status).toBe(200);
});

describe('headers', () => {
	test('a page allows its own scripts by nonce only, and nobody frames it', async () => {
		const page = await room.app.ask('/sign-in', { headers: { accept: 'text/html' } });
		const csp = page.headers['content-security-policy'] as string;
		const scripts = /script-src ([^;]*)/.exec(csp)![1]!;
		expect(scripts).toMatch(/'nonce-[^']+'/);
		expect(scripts).not.toContain('unsafe');
		expect(csp).toContain("frame-ancestors 'none'");
		expect(page.headers['x-content-type-options']).toBe('nosniff');
		expect(page.headers['referrer-policy']).toBe('same-origin');
		const nonce = /'nonce-([^']+)'/.exec(scripts)![1]!;
		for (const [tag] of page.text.matchAll(/<script[^>]*>/g)) expect(tag).toContain(nonce);
	});

	test('metrics want their token, and show no address and no name', async () => {
		const token = 'token-that-only-the-scraper-has';
		expect((await room.app.ask('/metrics')).status).toBe(401);
		expect((await room.app.withKey('wrong')('/metrics')).status).toBe(401);
		const metrics = await room.app.withKey(token)('/metrics');
		expect(metrics.status).toBe(200);
		expect(metrics.text).toMatch(/^lodekeep_http_requests_total\{/m);
		expect(metrics.text).not.toContain('tallow');
	});
});

test('nothing that was secret in all of the above is in the log', async () => {
	const log = room.app.output();
	const [tokens] = await room.store.pool.query('SELECT 1');
	expect(tokens).toBeDefined();
	const secrets = [
		SEED_PASSWORD,
		...['seven loud gates', 'eleven soft stones', 'a guess that is wrong'],
		...[TEST_SECRET, 'token-that-only-the-scraper-has', 'lodekeep-session=', 'ticket='],
		new URL(room.database.url).password
	];
	for (const secret of secrets) expect(log).not.toContain(secret);
	expect(log).not.toMatch(/lodekeep_[0-9a-f]{12}_[0-9a-f]{64}/);
});
