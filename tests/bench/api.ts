import { Agent, request } from 'node:http';
import { makeKey } from '$lib/server/auth/make-key';
import { connect, type Store } from '$lib/server/store/connect';
import { bay, bayState, site, zone } from '$lib/server/store/schema';
import { startApp } from '../support/app';
import { startDatabase } from '../support/database';
import { bayPolygon } from '../support/seed';

/**
 * npx tsx tests/bench/api.ts
 *
 * Polling of a site of 500 bays by the built app over loopback: the list, the same coded, a 304, what
 * changed since a cursor. One JSON line each: median and 99th percentile of single requests, and
 * requests a second from 16 at once. The key's limit is spread over as many keys as it takes.
 */
const BAYS = 500;
const SINGLE = 300;
const MANY = 4_000;
const AT_ONCE = 16;

async function makeSite(store: Store): Promise<void> {
	const nowMs = Date.now();
	const at = { latDeg: 47.6, lonDeg: -8.3, timezone: 'Etc/UTC', createdAtMs: nowMs };
	const [made] = await store.db.insert(site).values({ ...at, slug: 'bench', name: 'Bench' });
	const siteId = made.insertId;
	const [z] = await store.db.insert(zone).values({ siteId, code: 'A', name: 'A' });
	for (let i = 0; i < BAYS; i++) {
		const geometry = JSON.stringify(bayPolygon(at.latDeg, at.lonDeg, i % 50, Math.floor(i / 50)));
		const row = { siteId, zoneId: z.insertId, code: `A-${i}`, geometry, createdAtMs: nowMs };
		const [{ insertId }] = await store.db.insert(bay).values(row);
		await store.db.insert(bayState).values({
			...{ bayId: insertId, siteId, condition: 'in_service' },
			...{ state: i % 2 === 0 ? 'occupied' : 'vacant', sinceMs: nowMs, confidence20: 19 }
		});
	}
}

const agent = new Agent({ keepAlive: true, maxSockets: AT_ONCE });

async function ask(url: string, headers: Record<string, string>) {
	return await new Promise<{ status: number; etag: string; bytes: number }>((resolve, reject) => {
		const sent = request(url, { agent, headers }, (res) => {
			let bytes = 0;
			res.on('data', (chunk: Buffer) => (bytes += chunk.length));
			res.on('end', () => {
				resolve({ status: res.statusCode ?? 0, etag: res.headers.etag ?? '', bytes });
			});
		});
		sent.on('error', reject);
		sent.end();
	});
}

const quantile = (sorted: readonly number[], q: number): number =>
	Number((sorted[Math.min(sorted.length - 1, Math.floor(q * sorted.length))] ?? 0).toFixed(2));

const database = await startDatabase();
const store = connect(database.url);
await makeSite(store);
const keys: string[] = [];
for (let i = 0; i < 40; i++) {
	const made = await makeKey(store.db, { name: `b${i}`, scopes: ['occupancy'], sites: 'all' });
	if (made.ok) keys.push(made.key);
}
const app = await startApp({ databaseUrl: database.url, env: { LOG_LEVEL: 'warn' } });
const url = `${app.origin}/api/v1/sites/bench/bays?limit=1000`;
const tag = (await ask(url, { authorization: `Bearer ${keys[0] ?? ''}` })).etag;
const br = { 'accept-encoding': 'br' };
const cases: [string, string, Record<string, string>, number][] = [
	['list', url, {}, 200],
	['list br', url, br, 200],
	['304', url, { 'if-none-match': tag }, 304],
	['changes', `${url}&changes=0`, {}, 200]
];
let turn = 0;
for (const [what, target, headers, status] of cases) {
	const one = async () => {
		const key = keys[turn++ % keys.length] ?? '';
		const answer = await ask(target, { ...headers, authorization: `Bearer ${key}` });
		if (answer.status !== status) throw new Error(`${what}: ${answer.status}`);
		return answer.bytes;
	};
	const bytes = await one();
	const timesMs: number[] = [];
	for (let i = 0; i < SINGLE; i++) {
		const beganMs = performance.now();
		await one();
		timesMs.push(performance.now() - beganMs);
	}
	timesMs.sort((a, b) => a - b);
	const beganMs = performance.now();
	let left = MANY;
	const worker = async () => {
		while (left-- > 0) await one();
	};
	await Promise.all(Array.from({ length: AT_ONCE }, worker));
	const perS = Math.round((MANY / (performance.now() - beganMs)) * 1000);
	const [p50Ms, p99Ms] = [quantile(timesMs, 0.5), quantile(timesMs, 0.99)];
	console.log(JSON.stringify({ bench: 'api', what, bays: BAYS, bytes, p50Ms, p99Ms, perS }));
}
agent.destroy();
await app.stop();
await store.close();
await database.close();
