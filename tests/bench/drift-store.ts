/**
 * What it costs to close an hour of a whole fleet on a real database: 60 readings a node, their history, memories of
 * the hours before, one transaction. `BENCH_NODES` (10,000), `BENCH_HOURS` (3); the first hour begins all nodes anew.
 */
import { pathToFileURL } from 'node:url';
import { BUILT_IN_PROFILES } from '../../src/lib/magnetics/sensor-profile';
import { closeSiteHour } from '../../src/lib/server/drift/close-hour';
import { Transactions } from '../../src/lib/server/ingest/transaction';
import { createSecret } from '../../src/lib/server/secret';
import type { Store } from '../../src/lib/server/store/connect';
import { insertTuples } from '../../src/lib/server/store/queries/bulk';
import * as lease from '../../src/lib/server/store/queries/lease';
import { startDatabase } from '../support/database';
import { makeSite, openStore, SECRET, type TestNode } from '../support/ingest';

const NODES = Number(process.env['BENCH_NODES'] ?? 10_000);
const HOURS = Number(process.env['BENCH_HOURS'] ?? 3);
const HOUR_MS = 3_600_000;
const ROWS = 60;

async function fillHour(store: Store, nodes: readonly TestNode[], hourMs: number): Promise<void> {
	for (let at = 0; at < nodes.length; at += 100) {
		const tuples = nodes.slice(at, at + 100).flatMap(({ id }) =>
			Array.from({ length: ROWS }, (_, k) => {
				const atMs = hourMs + k * 60_000 + (id % 60) * 1000;
				const noise = (k * 7 + id) % 13;
				return `(${id},${atMs},1,${((hourMs / 60_000) % 1e9) + k},0,${2949 + noise},${-410 - noise},${7209 + noise},1,${150 + (k % 5)},3600,-70,0)`;
			})
		);
		await insertTuples(
			store.pool,
			'INSERT INTO reading (node_id,at_ms,boot,seq,`row`,x,y,z,polarity,temp_dc,battery_mv,rssi_dbm,flags)',
			tuples
		);
	}
}

async function settle(store: Store, nodes: readonly TestNode[], fromMs: number): Promise<void> {
	for (const node of nodes)
		await store.pool.query('UPDATE node SET bay_id = ?, placed_at_ms = ? WHERE id = ?', [
			node.bayId,
			fromMs,
			node.id
		]);
	await insertTuples(
		store.pool,
		'INSERT INTO reference (node_id,bay_id,learned_at_ms,x_mg,y_mg,z_mg,sigma_mg,temp_c,offset_x_mg,offset_y_mg,offset_z_mg,readings,accepted_at_ms)',
		nodes.map(
			({ id, bayId }) => `(${id},${bayId},${fromMs},150,-60,400,0.5,15,30,35,40,60,${fromMs})`
		)
	);
	await insertTuples(
		store.pool,
		'INSERT INTO history (bay_id,at_ms,type,state,uncertainty_s,decided_at_ms)',
		nodes.map(({ bayId }) => `(${bayId},${fromMs},'known','vacant',0,${fromMs})`)
	);
}

async function measure(): Promise<void> {
	const database = await startDatabase();
	const store = openStore(database.url);
	try {
		const { siteId, nodes } = await makeSite(store, createSecret(SECRET), {
			nodes: NODES,
			prefix: 'DRIFT'
		});
		const beginMs = Math.floor(Date.now() / HOUR_MS) * HOUR_MS - (HOURS + 1) * HOUR_MS;
		await settle(store, nodes, beginMs);
		const holder = `bench-${process.pid}`;
		const transactions = new Transactions(async () => await store.batchConnection(), holder);
		const site = {
			...{ siteId, fromMs: beginMs, rule: 'calibrate' as const },
			nodes: nodes.map(({ id, bayId }) => ({
				id,
				bayId,
				placedAtMs: beginMs,
				profile: BUILT_IN_PROFILES[0]!,
				nearBayIds: []
			}))
		};
		for (let h = 0; h < HOURS; h++) {
			const hourMs = beginMs + h * HOUR_MS;
			await fillHour(store, nodes, hourMs);
			await lease.hold(store.pool, lease.PIPELINE_LEASE, holder);
			const keep = setInterval(() => {
				void lease.hold(store.pool, lease.PIPELINE_LEASE, holder).catch(() => undefined);
			}, 3_000);
			const began = performance.now();
			const closed = await closeSiteHour({ sql: store.pool, transactions }, site, hourMs);
			clearInterval(keep);
			const s = Math.round((performance.now() - began) / 100) / 10;
			const heapMb = Math.round(process.memoryUsage().heapUsed / 1e6);
			process.stdout.write(
				`${JSON.stringify({ bench: 'drift-store', hour: h, ...closed, rows: NODES * ROWS, s, heapMb })}\n`
			);
		}
		transactions.close();
	} finally {
		await store.close();
		await database.close();
	}
}

if (import.meta.url === pathToFileURL(process.argv[1] ?? '').href) await measure();
