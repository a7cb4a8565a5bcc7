import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import type { Role, Scope } from '$lib/schemas/roles';
import { ROUTES, type RouteName } from '$lib/schemas/v1/route-table';
import type { RouteSpec } from '$lib/schemas/v1/spec';
import type { TestApp } from '../support/app';
import { newTicket } from '$lib/server/auth/ticket';
import * as wallLinks from '$lib/server/store/queries/wall-links';
import { openRoom, type Room } from '../support/api-room';

/**
 * Who may do what, as api.md ('Routes', the scope column) and product.md ('The people') say it. Roles
 * by scope unless a route names its own; written out here, not taken from the code.
 */
const READERS: Role[] = ['operator', 'maintenance', 'integrator', 'admin'];
const EVERYDAY: Role[] = ['operator', 'maintenance', 'admin'];
const FITTERS: Role[] = ['maintenance', 'admin'];
const EXPECTED: Record<RouteName, [Scope | 'any' | 'none', Role[]]> = {
	'GET /self': ['any', READERS],
	'GET /sites': ['occupancy', READERS],
	'POST /sites': ['provision', ['admin']],
	'GET /sites/{site}': ['occupancy', READERS],
	'PATCH /sites/{site}': ['provision', FITTERS],
	'DELETE /sites/{site}': ['provision', ['admin']],
	'GET /sites/{site}/live': ['occupancy', READERS],
	'GET /sites/{site}/bays': ['occupancy', READERS],
	'POST /sites/{site}/bays': ['provision', FITTERS],
	'GET /sites/{site}/bays/{code}': ['occupancy', READERS],
	'PATCH /sites/{site}/bays/{code}': ['provision', FITTERS],
	'DELETE /sites/{site}/bays/{code}': ['provision', FITTERS],
	'POST /sites/{site}/bays/{code}/settle': ['provision', EVERYDAY],
	'GET /sites/{site}/closures': ['occupancy', READERS],
	'POST /sites/{site}/closures': ['provision', EVERYDAY],
	'GET /sites/{site}/events': ['occupancy', READERS],
	'GET /sites/{site}/changes': ['occupancy', READERS],
	'GET /sites/{site}/stays': ['occupancy', READERS],
	'GET /sites/{site}/nodes': ['telemetry', READERS],
	'POST /sites/{site}/nodes': ['provision', FITTERS],
	'GET /nodes/{serial}': ['telemetry', READERS],
	'PATCH /nodes/{serial}': ['provision', FITTERS],
	'POST /nodes/{serial}/key': ['provision', FITTERS],
	'POST /nodes/{serial}/place': ['provision', FITTERS],
	'POST /nodes/{serial}/accept': ['provision', FITTERS],
	'POST /nodes/{serial}/withdraw': ['provision', FITTERS],
	'GET /nodes/{serial}/readings': ['telemetry', READERS],
	'GET /nodes/{serial}/drift': ['telemetry', READERS],
	'POST /nodes/{serial}/refresh': ['refresh', EVERYDAY],
	'GET /refreshes': ['refresh', EVERYDAY],
	'GET /refreshes/{id}': ['refresh', EVERYDAY],
	'POST /refreshes/{id}/call-off': ['refresh', EVERYDAY],
	'GET /openapi.json': ['none', READERS]
};

type Handler = { rule?: RouteSpec };
const METHODS = ['GET', 'POST', 'PUT', 'PATCH', 'DELETE'];
const servers = import.meta.glob<Record<string, Handler>>('/src/routes/api/**/+server.ts', {
	eager: true
});

/** Every handler below src/routes/api, as 'METHOD /path/{param}', with the rule it is checked by. */
const found = Object.entries(servers).flatMap(([file, module]) => {
	const path = file
		.replace('/src/routes', '')
		.replace('/+server.ts', '')
		.replaceAll(/\[(\w+)\]/g, '{$1}');
	return METHODS.filter((method) => method in module).map((method) => ({
		name: `${method} ${path}`,
		method,
		path,
		rule: module[method]?.rule
	}));
});
const desk = found.filter(({ path }) => path.startsWith('/api/desk'));

describe('the route table', () => {
	test('every route file of v1 is in it, and every row has its file', () => {
		const files = found
			.filter(({ path }) => path.startsWith('/api/v1'))
			.map(({ name }) => name.replace('/api/v1', ''));
		expect(files.sort()).toEqual(Object.keys(ROUTES).sort());
	});

	test('every handler below /api is checked by a rule, those of v1 by their own row', () => {
		for (const { name, rule } of found) {
			expect(rule, name).toBeDefined();
			const row = name.replace('/api/v1', '');
			if (row !== name) expect(rule).toBe(ROUTES[row as RouteName]);
		}
	});

	test('no key may use what only the own pages need, and each such route names its roles', () => {
		expect(desk.length).toBeGreaterThan(0);
		for (const { name, rule } of desk) {
			expect(rule?.scope, name).toBeNull();
			expect(rule?.roles?.length, name).toBeGreaterThan(0);
		}
	});
});

let room: Room;
interface Caller {
	ask: ReturnType<TestApp['withKey']>;
	role: Role | null;
	scopes: Scope[];
	/** Whether the yard is within reach. */
	yard: boolean;
	all: boolean;
}
const callers: Record<string, Caller> = {};

/** Strangers are limited by address: each of these requests comes from another one. */
let asked = 0;
const anywhere =
	(ask: TestApp['ask']): TestApp['ask'] =>
	async (path, wanted) => {
		const address = `198.51.100.${++asked % 250}`;
		return await ask(path, {
			...wanted,
			headers: { ...wanted?.headers, 'x-forwarded-for': address }
		});
	};

beforeAll(async () => {
	room = await openRoom({ ADDRESS_HEADER: 'x-forwarded-for' });
	const { app, seeded } = room;
	const person = async (key: keyof typeof seeded.people, role: Role) => ({
		ask: await app.signIn(seeded.emails[key]),
		...{ role, scopes: [], yard: key !== 'elsewhere', all: role === 'admin' }
	});
	for (const role of READERS) callers[role] = await person(role, role);
	callers['an operator of another site'] = await person('elsewhere', 'operator');
	const SCOPES: Scope[] = ['occupancy', 'telemetry', 'provision', 'refresh', 'webhooks'];
	for (const scope of SCOPES) {
		callers[`a key with ${scope}`] = {
			ask: await room.asking({ scopes: [scope] }),
			...{ role: null, scopes: [scope], yard: true, all: true }
		};
	}
	callers['a key for another site'] = {
		ask: await room.asking({ scopes: SCOPES, sites: ['far-shed'] }),
		...{ role: null, scopes: SCOPES, yard: false, all: false }
	};
	callers['a key for the yard'] = {
		ask: await room.asking({ scopes: SCOPES, sites: ['tallow-yard'] }),
		...{ role: null, scopes: SCOPES, yard: true, all: false }
	};
	callers['nobody'] = { ask: app.ask, role: null, scopes: [], yard: false, all: false };
	const bad = `lodekeep_000000000000_${'0'.repeat(64)}`;
	callers['a made-up key'] = { ...callers['nobody'], ask: app.withKey(bad) };
	for (const caller of Object.values(callers)) caller.ask = anywhere(caller.ask);
});
afterAll(async () => {
	await room.close();
});

const fill = (path: string): string =>
	path
		.replace('{site}', 'tallow-yard')
		.replace('{code}', 'A-01')
		.replace('{serial}', 'SEED-A-01')
		.replace('{id}', '1');

/** Past every check of who asks comes the query: this one is refused everywhere, and does nothing. */
const REFUSED_LATER = '?nonsense=1';
const isStranger = (name: string): boolean => name === 'nobody' || name === 'a made-up key';

function expectedV1(route: RouteName, name: string, c: Caller): number {
	const [scope, roles] = EXPECTED[route];
	if (scope === 'none') return 400;
	if (isStranger(name)) return 401;
	const may =
		c.role !== null ? roles.includes(c.role) : scope === 'any' || c.scopes.includes(scope);
	if (!may) return 403;
	if (route === 'POST /sites' && !c.all) return 403;
	return /\{(site|serial)\}/.test(route) && !c.yard ? 404 : 400;
}

test.each(Object.keys(EXPECTED) as RouteName[])(
	'%s answers each caller as the table says',
	async (route) => {
		const [method = '', path = ''] = route.split(' ');
		const got: Record<string, number> = {};
		const wanted: Record<string, number> = {};
		for (const [name, caller] of Object.entries(callers)) {
			const answer = await caller.ask(`/api/v1${fill(path)}${REFUSED_LATER}`, { method });
			got[name] = answer.status;
			wanted[name] = expectedV1(route, name, caller);
			expect(answer.headers['content-type']).toBe('application/problem+json');
			if (answer.status === 403 && caller.role === null && caller.scopes.length === 1) {
				expect(answer.json()['detail']).toContain(`'${EXPECTED[route][0]}'`);
			}
			if (answer.status === 404) {
				expect(answer.json()['detail']).toMatch(/^Not there, or not among (this key's|your) sites/);
			}
		}
		expect(got).toEqual(wanted);
	}
);

test.each(desk.map(({ name }) => name))('%s answers each caller as its rule says', async (name) => {
	const { method, path, rule } = desk.find((one) => one.name === name)!;
	const got: Record<string, number> = {};
	const wanted: Record<string, number> = {};
	for (const [who, caller] of Object.entries(callers)) {
		// Keys are not looked at here: a program without a session is nobody.
		const may = caller.role !== null && (rule?.roles?.includes(caller.role) ?? false);
		const reached = !/\{(site|serial)\}/.test(path) || caller.yard;
		wanted[who] = caller.role === null ? 401 : !may ? 403 : reached ? 400 : 404;
		got[who] = (await caller.ask(fill(path) + REFUSED_LATER, { method })).status;
	}
	expect(got).toEqual(wanted);
});

const pages = Object.keys(import.meta.glob('/src/routes/**/+page.{svelte,server.ts}'))
	.filter((file) => file.startsWith('/src/routes/(app)'))
	.map((file) => file.replace('/src/routes/(app)', '').replace(/\/\+page\..*$/, ''))
	.filter((path, i, all) => all.indexOf(path) === i)
	.map((path) => path.replaceAll(/\[(\w+)\]/g, '{$1}'));

describe('pages', () => {
	test.each(pages)('%s sends who is not signed in to sign in', async (path) => {
		const answer = await room.app.ask(fill(path) === '' ? '/' : fill(path));
		expect(answer.status).toBe(303);
		expect(answer.headers.location).toMatch(/^\/sign-in\?to=/);
		const data = await room.app.ask(`${fill(path)}/__data.json`);
		expect(data.json()).toMatchObject({ type: 'redirect' });
	});

	test.each(pages.filter((path) => path.includes('{site}')))(
		'%s of a site out of reach is not there',
		async (path) => {
			const { ask } = callers['an operator of another site']!;
			expect((await ask(fill(path))).status).toBe(404);
			const data = await ask(`${fill(path)}/__data.json`);
			expect(data.text).not.toContain('Tallow');
		}
	);
});

/** What is open without signing in: sign-in and passwords, the shell without a connection, the wall. */
const PUBLIC = [
	'/acknowledge',
	'/desk/primer',
	'/invitation',
	'/offline',
	'/password',
	'/reset',
	'/sign-in',
	'/sign-out',
	'/unsubscribe',
	'/wall/{token}',
	'/wall/{token}/now'
];

describe('outside sign-in', () => {
	test('stands what is listed here and nothing else', () => {
		const routes = Object.keys(
			import.meta.glob(['/src/routes/**/+page.svelte', '/src/routes/**/+server.ts'])
		)
			.filter((file) => file.startsWith('/src/routes/(public)'))
			.map((file) =>
				file
					.replace('/src/routes/(public)', '')
					.replace(/\/\+(page|server)\..*$/, '')
					.replaceAll(/\[(\w+)\]/g, '{$1}')
			);
		expect(routes.sort()).toEqual(PUBLIC);
	});

	/** A link to the yard, as the sheet of wall links makes it. */
	const wall = async (more: { expiresAtMs?: number } = {}) => {
		const { text, hash } = newTicket();
		const id = await wallLinks.create(
			room.store.db,
			{
				...{ tokenHash: hash, name: 'gate house', turnS: 0, makerId: null },
				siteIds: [room.seeded.sites.yard],
				expiresAtMs: more.expiresAtMs ?? null
			},
			Date.now()
		);
		return { text, id };
	};
	const asked = async (path: string, headers: Record<string, string> = {}) =>
		await anywhere(room.app.ask)(path, { headers });

	test('a wall link opens its one view of its own sites, without personal bays', async () => {
		const { text } = await wall();
		const page = await asked(`/wall/${text}`);
		const now = await asked(`/wall/${text}/now?site=tallow-yard`);
		expect([page.status, now.status]).toEqual([200, 200]);
		// The seed marks C-04 personal; A-01 is not.
		for (const { text: body } of [page, now]) {
			expect(body).toContain('A-01');
			expect(body).not.toContain('C-04');
		}
		expect(now.text).not.toMatch(/SEED-|because|Perro/);
		expect(now.json()['bays']).toHaveLength(23);
		for (const bay of now.json()['bays'] as { since: unknown }[]) expect(bay.since).toBeNull();
		expect((await asked(`/wall/${text}/now?site=far-shed`)).status).toBe(404);
		expect(page.headers['referrer-policy']).toBe('no-referrer');
		expect(page.headers['cache-control']).toBe('no-store');
	});

	test('a wall token opens nothing else, however it is sent', async () => {
		const { text } = await wall();
		const ways = [
			{ authorization: `Bearer ${text}` },
			{ cookie: `lodekeep-session=${text}` },
			{ cookie: `wall=${text}` }
		];
		for (const headers of ways) {
			expect((await asked('/api/v1/sites/tallow-yard/bays', headers)).status).toBe(401);
			expect((await asked('/api/desk/sites', headers)).status).toBe(401);
			expect((await asked('/sites/tallow-yard/plan', headers)).status).toBe(303);
		}
		const written = await anywhere(room.app.ask)(`/wall/${text}/now?site=tallow-yard`, {
			method: 'POST'
		});
		expect([403, 405]).toContain(written.status);
	});

	test('a wall link that is revoked, over or made up is not known', async () => {
		const { text, id } = await wall();
		await wallLinks.revoke(room.store.db, id, Date.now());
		const over = await wall({ expiresAtMs: Date.now() - 1 });
		for (const token of [text, over.text, newTicket().text, 'x']) {
			expect((await asked(`/wall/${token}`)).status).toBe(404);
			expect((await asked(`/wall/${token}/now?site=tallow-yard`)).status).toBe(404);
		}
	});

	test('an operator revokes no wall link that shows a site out of reach', async () => {
		const { id } = await wall();
		const body = new URLSearchParams({ id: String(id) }).toString();
		const headers = { 'content-type': 'application/x-www-form-urlencoded', accept: 'text/html' };
		const revoke = async (who: string) =>
			(await callers[who]!.ask('/walls?/revoke', { method: 'POST', headers, body })).status;
		expect(await revoke('an operator of another site')).toBe(404);
		expect(await revoke('integrator')).toBe(403);
		expect(await revoke('operator')).toBe(200);
	});
});
