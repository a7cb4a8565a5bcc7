import { afterAll, beforeAll, describe, expect, test } from 'vitest';
import { ROUTES, type RouteName } from '$lib/schemas/v1/route-table';
import { problem } from '$lib/schemas/v1/common';
import type { TestApp } from '../support/app';
import { openRoom, type Room } from '../support/api-room';
import type { Answer } from '../support/http';

let room: Room;
let ask: ReturnType<TestApp['withKey']>;

beforeAll(async () => {
	room = await openRoom();
	ask = await room.asking();
});
afterAll(async () => {
	await room.close();
});

/** Of the form of RFC 9457, with the status that the answer has (check-values 9e). */
function expectProblem(answer: Answer, status: number): Record<string, unknown> {
	expect(answer.status).toBe(status);
	expect(answer.headers['content-type']).toBe('application/problem+json');
	const body = problem.parse(answer.json());
	expect(body.status).toBe(status);
	return answer.json();
}

describe('every reading route answers exactly what openapi.json says', () => {
	const paths: [RouteName, string][] = [
		['GET /self', '/self'],
		['GET /sites', '/sites'],
		['GET /sites/{site}', '/sites/tallow-yard'],
		['GET /sites/{site}/live', '/sites/tallow-yard/live'],
		['GET /sites/{site}/bays', '/sites/tallow-yard/bays'],
		['GET /sites/{site}/bays', '/sites/tallow-yard/bays?changes=10'],
		['GET /sites/{site}/bays/{code}', '/sites/tallow-yard/bays/A-09'],
		['GET /sites/{site}/bays/{code}', '/sites/far-shed/bays/S-2'],
		['GET /sites/{site}/events', '/sites/tallow-yard/events?effective=true'],
		['GET /sites/{site}/changes', '/sites/tallow-yard/changes?after=3'],
		['GET /sites/{site}/stays', '/sites/tallow-yard/stays'],
		['GET /sites/{site}/closures', '/sites/tallow-yard/closures'],
		['GET /sites/{site}/nodes', '/sites/tallow-yard/nodes'],
		['GET /nodes/{serial}', '/nodes/SEED-A-03'],
		['GET /nodes/{serial}/drift', '/nodes/SEED-A-03/drift?hours=48'],
		['GET /nodes/{serial}/readings', '/nodes/SEED-A-03/readings'],
		['GET /nodes/{serial}/readings', '/nodes/SEED-A-03/readings?points=10'],
		['GET /nodes/{serial}/readings', '/nodes/SEED-A-03/readings?raw=true&limit=7']
	];
	test.each(paths)('%s as %s', async (name, path) => {
		const answer = await ask(`/api/v1${path}`);
		expect(answer.status).toBe(200);
		const rule = ROUTES[name];
		if (!('answer' in rule)) throw new Error('no answer is described');
		rule.answer.parse(answer.json());
	});
});

test('counts of a site add up by zone, and a zone of fewer than five bays with a personal one is withheld', async () => {
	const site = (await ask('/api/v1/sites/tallow-yard')).json() as {
		counts: Record<string, number>;
		zones: { code: string; counts: Record<string, number> | null }[];
	};
	// seed.ts: 24 bays; A-05, B-04, C-01 unknown; A-09 doubtful; C holds 4 bays, C-04 personal.
	expect(site.counts).toMatchObject({ bays: 24, unknown: 3, closed: 0, doubtful: 1 });
	expect(site.zones.map((z) => z.counts?.['bays'] ?? null)).toEqual([12, 8, null]);
});

test('a key that may not see personal bays sees nothing of them anywhere', async () => {
	const blind = await room.asking({ personalAllowed: false });
	const texts = await Promise.all(
		['bays', 'events', 'changes', 'stays', 'nodes', 'closures', 'bays?changes=0'].map(
			async (path) => (await blind(`/api/v1/sites/tallow-yard/${path}`)).text
		)
	);
	for (const text of texts) expect(text).not.toContain('C-04');
	expectProblem(await blind('/api/v1/sites/tallow-yard/bays/C-04'), 404);
	expectProblem(await blind('/api/v1/nodes/SEED-C-04'), 404);
	const site = (await blind('/api/v1/sites/tallow-yard')).json() as { counts: { bays: number } };
	expect(site.counts.bays).toBe(23);
});

test('stays are the runs of taken in the effective history', async () => {
	const { items } = (await ask('/api/v1/sites/tallow-yard/stays?bay=A-09')).json() as {
		items: { from: string; to: string | null; end: string | null }[];
	};
	// seed.ts: taken 9 h before the present stay for 7 h, and since 77 min.
	const since = room.seeded.nowMs - 77 * 60_000;
	expect(items).toEqual([
		{
			bay: 'A-09',
			from: new Date(since - 9 * 3_600_000).toISOString(),
			to: new Date(since - 2 * 3_600_000).toISOString(),
			end: 'departure'
		},
		{ bay: 'A-09', from: new Date(since).toISOString(), to: null, end: null }
	]);
});

test('a stay under way before the range keeps its true start', async () => {
	const since = room.seeded.nowMs - 77 * 60_000;
	const from = new Date(since - 5 * 3_600_000).toISOString();
	const to = new Date(since - 4 * 3_600_000).toISOString();
	const path = `/api/v1/sites/tallow-yard/stays?bay=A-09&from=${from}&to=${to}`;
	const { items } = (await ask(path)).json() as { items: { from: string; to: string }[] };
	expect(items).toHaveLength(1);
	expect(items[0]?.from).toBe(new Date(since - 9 * 3_600_000).toISOString());
	expect(items[0]?.to).toBe(new Date(since - 2 * 3_600_000).toISOString());
});

describe('pages', () => {
	test.each([
		'sites',
		'sites/tallow-yard/bays',
		'sites/tallow-yard/events',
		'sites/tallow-yard/changes',
		'sites/tallow-yard/stays',
		'sites/tallow-yard/nodes',
		'nodes/SEED-A-03/readings?raw=true'
	])('%s read by sevens is the same list as read at once', async (path) => {
		const join = path.includes('?') ? '&' : '?';
		const whole = (await ask(`/api/v1/${path}${join}limit=1000`)).json() as { items: unknown[] };
		const read: unknown[] = [];
		let next: string | null = '';
		while (next !== null) {
			const cursor: string = next === '' ? '' : `&cursor=${next}`;
			const page = (await ask(`/api/v1/${path}${join}limit=7${cursor}`)).json() as {
				items: unknown[];
				next: string | null;
			};
			expect(page.items.length).toBeLessThanOrEqual(7);
			read.push(...page.items);
			next = page.next;
		}
		expect(read).toEqual(whole.items);
	});
});

describe('what is not understood is refused with a reason', () => {
	test.each([
		['an unknown query parameter', '/sites?nonsense=1', 400],
		['a parameter given twice', '/sites?limit=1&limit=2', 400],
		['a limit over 1000', '/sites?limit=1001', 400],
		['a limit of nothing', '/sites?limit=0', 400],
		['a made-up cursor', '/sites/tallow-yard/bays?cursor=abc', 400],
		['a time without offset', '/sites/tallow-yard/events?from=2026-03-01T00:00:00', 400],
		['an unknown route', '/nowhere', 404],
		['an unknown site', '/sites/elsewhere', 404],
		['an unknown bay', '/sites/tallow-yard/bays/Z-99', 404],
		['an unknown node', '/nodes/NOBODY-1', 404],
		['a path that is no UTF-8', '/sites/%ff', 400],
		['a cursor ahead of the log', '/sites/tallow-yard/bays?changes=999999', 410],
		[
			'a range that ends before it begins',
			'/nodes/SEED-A-03/readings?from=2026-03-02T00:00:00Z&to=2026-03-01T00:00:00Z',
			400
		]
	])('%s', async (_, path, status) => {
		expectProblem(await ask(`/api/v1${path}`), status);
	});

	test('a route outside v1 too', async () => {
		expectProblem(await room.app.ask('/api'), 404);
		expectProblem(await room.app.ask('/api/v2/sites'), 404);
		expectProblem(await room.app.ask('/api/desk/nowhere'), 404);
	});

	test('a method that a route does not take, with Allow', async () => {
		const answer = await ask('/api/v1/self', { method: 'DELETE' });
		expectProblem(answer, 405);
		expect(answer.headers.allow).toContain('GET');
	});

	test('a body of another type', async () => {
		const sent = { method: 'POST', headers: { 'content-type': 'text/plain' }, body: 'x' };
		expectProblem(await ask('/api/v1/sites', sent), 415);
		const form = { ...sent, headers: { 'content-type': 'application/x-www-form-urlencoded' } };
		expectProblem(await ask('/api/v1/sites', form), 415);
		const packed = {
			...sent,
			headers: { 'content-type': 'application/json', 'content-encoding': 'gzip' }
		};
		expectProblem(await ask('/api/v1/sites', packed), 415);
	});

	test('a body that is too long, said so or sent so', async () => {
		const body = JSON.stringify({ slug: 'x'.repeat(1_100_000) });
		const headers = { 'content-type': 'application/json' };
		expectProblem(await ask('/api/v1/sites', { method: 'POST', headers, body }), 413);
		const huge = Buffer.alloc(21 * 1024 * 1024, 0x20);
		const answer = await ask('/api/v1/sites/tallow-yard/bays', {
			method: 'POST',
			headers,
			body: huge
		}).catch(() => null);
		// The connection may be cut before the answer is read: then nothing was taken either.
		if (answer !== null) expectProblem(answer, 413);
	});

	test('a body that is not JSON, none at all, one with a field too many', async () => {
		const headers = { 'content-type': 'application/json' };
		const send = async (body?: string) =>
			await ask('/api/v1/sites', {
				method: 'POST',
				headers,
				...(body === undefined ? {} : { body })
			});
		expectProblem(await send('{"slug":'), 400);
		expectProblem(await send(), 400);
		const bad = await send(JSON.stringify({ slug: 'no blanks', lat: 91, lon: 0, more: 1 }));
		const { errors } = expectProblem(bad, 400) as { errors: { pointer: string }[] };
		expect(errors.map((e) => e.pointer).sort()).toEqual([
			'#/lat',
			'#/more',
			'#/name',
			'#/slug',
			'#/timezone'
		]);
	});

	test('a cursor older than what is kept: 410 with the first id', async () => {
		await room.store.pool.query('UPDATE site SET first_change = 5 WHERE id = ?', [
			room.seeded.sites.yard
		]);
		for (const path of ['bays?changes=3', 'events?after=3', 'changes?after=3']) {
			const body = expectProblem(await ask(`/api/v1/sites/tallow-yard/${path}`), 410);
			expect(body['firstId']).toBe(5);
			expect(body['detail']).toContain('read the whole list again');
		}
		expect((await ask('/api/v1/sites/tallow-yard/changes?after=4')).status).toBe(200);
		await room.store.pool.query('UPDATE site SET first_change = 1 WHERE id = ?', [
			room.seeded.sites.yard
		]);
	});
});

describe('probes', () => {
	test('/healthz and /readyz ask nobody; readyz names what is missing', async () => {
		expect((await room.app.ask('/healthz')).json()).toEqual({ status: 'alive' });
		const ready = await room.app.ask('/readyz');
		expect(ready.json()).toMatchObject({ database: true });
	});

	test('/metrics is not there without a token of its own', async () => {
		expect((await ask('/metrics')).status).toBe(404);
	});
});

test('HEAD is GET without the body', async () => {
	const get = await ask('/api/v1/sites/tallow-yard');
	const head = await ask('/api/v1/sites/tallow-yard', { method: 'HEAD' });
	expect(head.status).toBe(200);
	expect(head.bytes).toHaveLength(0);
	expect(head.headers.etag).toBe(get.headers.etag);
});
