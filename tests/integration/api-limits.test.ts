import { execFile } from 'node:child_process';
import { mkdtemp, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { promisify } from 'node:util';
import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { ROUTES } from '$lib/schemas/v1/route-table';
import type { TestApp } from '../support/app';
import { openRoom, type Room } from '../support/api-room';
import { http } from '../support/http';
import { SEED_PASSWORD } from '../support/seed';

const run = promisify(execFile);
let room: Room;
const MAP = 'https://map.example';
const SIGN = 'https://sign.example';

beforeAll(async () => {
	room = await openRoom({ ADDRESS_HEADER: 'x-forwarded-for' });
});
afterAll(async () => {
	await room.close();
});

describe('limits (draft-ietf-httpapi-ratelimit-headers, check-values 9j)', () => {
	test('every answer tells policy and rest; over the limit 429 with Retry-After', async () => {
		const ask = await room.asking({ scopes: ['occupancy'] });
		const first = await ask('/api/v1/self');
		expect(first.headers['ratelimit-policy']).toBe('"key";q=1200;w=60');
		expect(first.headers.ratelimit).toMatch(/^"key";r=1199;t=(60|59)$/);
		const { limits } = first.json() as { limits: Record<string, number> };
		expect(limits).toEqual({ requests: 1200, windowS: 60, pageItems: 1000 });
		let last = first;
		for (let i = 1; i < 1200; i += 40) {
			const many = Array.from({ length: 40 }, async () => await ask('/api/v1/self'));
			last = (await Promise.all(many)).find((a) => a.status === 429) ?? last;
		}
		const over = last.status === 429 ? last : await ask('/api/v1/self');
		expect(over.status).toBe(429);
		expect(Number(over.headers['retry-after'])).toBeGreaterThan(0);
		expect(over.headers.ratelimit).toMatch(/^"key";r=0;t=\d+$/);
		expect(over.json()).toMatchObject({
			type: 'https://iana.org/assignments/http-problem-types#quota-exceeded',
			status: 429,
			'violated-policies': ['key']
		});
		const other = await room.asking({ scopes: ['occupancy'] });
		expect((await other('/api/v1/self')).status).toBe(200);
	});

	test('guessing keys is limited by address, and other addresses are not', async () => {
		const guess = async (n: number, from: string) => {
			const key = `lodekeep_${String(n).padStart(12, '0')}_${'0'.repeat(64)}`;
			return await room.app.withKey(key)('/api/v1/self', { headers: { 'x-forwarded-for': from } });
		};
		const all = await Promise.all(
			Array.from({ length: 125 }, async (_, i) => await guess(i, '203.0.113.5'))
		);
		expect(all.filter((a) => a.status === 401)).toHaveLength(120);
		expect(all.filter((a) => a.status === 429)).toHaveLength(5);
		const refused = await guess(1, '203.0.113.6');
		expect(refused.status).toBe(401);
		expect(refused.headers['www-authenticate']).toContain('invalid_token');
	});
});

describe('CORS', () => {
	let map: TestApp['ask'];
	beforeAll(async () => {
		map = await room.asking({ scopes: ['occupancy'], origins: [MAP] });
		await room.asking({ scopes: ['occupancy'], origins: [SIGN] });
	});
	const preflight = async (origin: string) =>
		await room.app.ask('/api/v1/sites/tallow-yard/bays', {
			method: 'OPTIONS',
			headers: {
				origin,
				'access-control-request-method': 'GET',
				'access-control-request-headers': 'authorization'
			}
		});

	test.each([MAP, SIGN])('a preflight from %s is answered: some key allows it', async (origin) => {
		const answer = await preflight(origin);
		expect(answer.status).toBe(204);
		expect(answer.headers['access-control-allow-origin']).toBe(origin);
		expect(answer.headers['access-control-allow-headers']).toMatch(/authorization/i);
		expect(answer.headers['access-control-allow-methods']).toContain('PATCH');
		expect(answer.headers['access-control-allow-credentials']).toBeUndefined();
		expect(answer.headers.vary).toBe('Origin');
	});

	test('a preflight from anywhere else allows nothing', async () => {
		const answer = await preflight('https://other.example');
		expect(answer.headers['access-control-allow-origin']).toBeUndefined();
	});

	test("the request itself checks its key's own origins", async () => {
		const path = '/api/v1/sites/tallow-yard/bays';
		const own = await map(path, { headers: { origin: MAP } });
		expect(own.status).toBe(200);
		expect(own.headers['access-control-allow-origin']).toBe(MAP);
		expect(own.headers['access-control-expose-headers']).toContain('ETag');
		expect(own.headers.vary).toContain('Origin');
		const foreign = await map(path, { headers: { origin: SIGN } });
		expect(foreign.status).toBe(403);
		expect(foreign.headers['access-control-allow-origin']).toBeUndefined();
		expect((await map(path)).headers['access-control-allow-origin']).toBeUndefined();
	});

	test('a refusal to an allowed origin can be read there too', async () => {
		const refused = await map('/api/v1/sites/nowhere', { headers: { origin: MAP } });
		expect(refused.status).toBe(404);
		expect(refused.headers['access-control-allow-origin']).toBe(MAP);
	});
});

describe('openapi.json', () => {
	interface Document {
		openapi: string;
		paths: Record<string, Record<string, { operationId: string; parameters: { name: string }[] }>>;
	}
	let text: string;
	let document: Document;
	beforeAll(async () => {
		// Nobody is asked who they are.
		text = (await room.app.ask('/api/v1/openapi.json')).text;
		document = JSON.parse(text) as Document;
	});

	test('describes every route and nothing else', () => {
		const described = Object.entries(document.paths).flatMap(([path, operations]) =>
			Object.keys(operations).map((m) => `${m.toUpperCase()} ${path.replace('/api/v1', '')}`)
		);
		expect(document.openapi).toBe('3.1.0');
		expect(described.sort()).toEqual(Object.keys(ROUTES).sort());
		const ids = Object.values(document.paths).flatMap((operations) =>
			Object.values(operations).map((o) => o.operationId)
		);
		expect(new Set(ids).size).toBe(ids.length);
	});

	test('names every query parameter that a route takes', () => {
		const { parameters } = document.paths['/api/v1/sites/{site}/events']!['get']!;
		expect(parameters.map((p) => p.name)).toEqual([
			...['site', 'after', 'from', 'to', 'bay', 'effective', 'limit', 'cursor'],
			'If-None-Match'
		]);
	});

	test('a public linter finds no error', async () => {
		const dir = await mkdtemp(join(tmpdir(), 'lodekeep-openapi-'));
		const file = join(dir, 'openapi.json');
		await writeFile(file, text);
		await writeFile(join(dir, 'redocly.yaml'), 'telemetry: off\n');
		const cli = join(import.meta.dirname, '../../node_modules/@redocly/cli/bin/cli.js');
		const options = { cwd: dir, env: { ...process.env, REDOCLY_TELEMETRY: 'off', CI: '1' } };
		const args = [cli, 'lint', file, '--format', 'json', '--extends', 'recommended'];
		const { stdout } = await run(process.execPath, args, options).catch(
			(error: unknown) => error as { stdout: string }
		);
		await rm(dir, { recursive: true });
		const { totals, problems } = JSON.parse(stdout) as {
			totals: { errors: number };
			problems: { severity: string; message: string }[];
		};
		expect(problems.filter((p) => p.severity === 'error')).toEqual([]);
		expect(totals.errors).toBe(0);
	}, 60_000);
});

describe('localhost', () => {
	test('pages are sent to ORIGIN; programs and probes are answered', async () => {
		const { port } = new URL(room.app.origin);
		const host = { host: `localhost:${port}` };
		const page = await room.app.ask('/sign-in?to=%2Fsites', { headers: host });
		expect(page.status).toBe(307);
		expect(page.headers.location).toBe(`${room.app.origin}/sign-in?to=%2Fsites`);
		expect((await room.app.ask('/healthz', { headers: host })).status).toBe(200);
		const ask = await room.asking();
		expect((await ask('/api/v1/self', { headers: host })).status).toBe(200);
	});
});

test('behind https the cookies are Secure with the __Host- prefix, and HSTS is sent', async () => {
	const secure = await openRoom({ ORIGIN: 'https://parking.example' });
	const answer = await http(`${secure.app.origin}/sign-in`, {
		method: 'POST',
		headers: {
			origin: 'https://parking.example',
			accept: 'text/html',
			'content-type': 'application/x-www-form-urlencoded'
		},
		body: new URLSearchParams({
			email: secure.seeded.emails.operator,
			password: SEED_PASSWORD
		}).toString()
	});
	expect(answer.status).toBe(303);
	const session = answer.headers['set-cookie']!.find((line) => line.includes('-session='))!;
	expect(session).toMatch(/^__Host-lodekeep-session=.*; Secure/);
	expect(answer.headers['strict-transport-security']).toBe('max-age=31536000');
	await secure.close();
}, 120_000);

test('the database away: alive, not ready, and every route says so in its form; back: all is well', async () => {
	const away = await openRoom();
	const ask = await away.asking();
	const operator = await away.app.signIn(away.seeded.emails.operator);
	await away.database.kill();
	expect((await away.app.ask('/healthz')).status).toBe(200);
	const ready = await away.app.ask('/readyz');
	expect(ready.status).toBe(503);
	expect(ready.json()).toMatchObject({ database: false });
	for (const who of [ask, operator]) {
		const answer = await who('/api/v1/sites/tallow-yard/bays');
		expect(answer.status).toBe(503);
		expect(answer.headers['content-type']).toBe('application/problem+json');
		expect(answer.headers['retry-after']).toBe('5');
	}
	await away.database.start();
	const endMs = Date.now() + 20_000;
	let status = 0;
	while (status !== 200 && Date.now() < endMs) {
		status = (await operator('/api/v1/sites/tallow-yard/bays')).status;
		await new Promise((go) => setTimeout(go, 100));
	}
	expect(status).toBe(200);
	await away.close();
}, 120_000);
