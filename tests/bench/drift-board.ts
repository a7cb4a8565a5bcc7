/**
 * What one request for the Drift board costs on a real database, ms: the first after an hour's close and the ones
 * after it. Every node remembers 30 days. `BENCH_NODES` ("2000,10000").
 */
import { pathToFileURL } from 'node:url';
import { packMemory } from '../../src/lib/drift/codec';
import { driftBoard } from '../../src/lib/server/drift/board-view';
import { createSecret } from '../../src/lib/server/secret';
import type { Store } from '../../src/lib/server/store/connect';
import { insertTuples } from '../../src/lib/server/store/queries/bulk';
import { startDatabase } from '../support/database';
import { makeSite, openStore, SECRET, type TestNode } from '../support/ingest';
import { newSite, runHour } from './drift-run';

const SIZES = (process.env['BENCH_NODES'] ?? '2000,10000').split(',').map(Number);
const DAYS = 30;
const KINDS = 24;
const REQUESTS = 4;
const LINE_HOURS = 336;

/** Memories of some simulated nodes after 30 days; a fleet repeats them. */
function memories(): Uint8Array[] {
	const site = newSite(KINDS, DAYS * 24, 1);
	for (let h = 1; h < DAYS * 24; h++)
		runHour(site, h, 'calibrate', { rho: 0.9, sigmaMg: 0.5 }, () => undefined);
	return site.drifts.map((drift) =>
		packMemory({
			referenceId: 1,
			drift,
			film: { lastPulseAtMs: null, lastClippedAtMs: null, lastOverFilmAtMs: null }
		})
	);
}

async function remember(
	store: Store,
	siteId: number,
	nodes: readonly TestNode[],
	all: readonly Uint8Array[]
): Promise<void> {
	for (let at = 0; at < nodes.length; at += 200) {
		const tuples = nodes.slice(at, at + 200).map(({ id }) => {
			const memory = Buffer.from(all[id % all.length]!).toString('hex');
			return `(${id},${siteId},1,x'${memory}')`;
		});
		await insertTuples(
			store.pool,
			'INSERT INTO drift_node (node_id,site_id,placed_at_ms,memory)',
			tuples
		);
	}
	await store.pool.query('UPDATE node SET placed_at_ms = 1 WHERE site_id = ?', [siteId]);
	for (const { id, bayId } of nodes)
		await store.pool.query('UPDATE node SET bay_id = ? WHERE id = ?', [bayId, id]);
}

async function measure(count: number, all: readonly Uint8Array[]): Promise<void> {
	const database = await startDatabase();
	const store = openStore(database.url);
	try {
		const { siteId, nodes } = await makeSite(store, createSecret(SECRET), {
			nodes: count,
			prefix: 'BOARD'
		});
		await remember(store, siteId, nodes, all);
		const ms: number[] = [];
		let rows = 0;
		for (let k = 0; k < REQUESTS; k++) {
			const began = performance.now();
			const board = await driftBoard(
				store.pool,
				{ id: siteId, pairRule: 'calibrate' },
				LINE_HOURS,
				Date.now()
			);
			ms.push(Math.round(performance.now() - began));
			rows = board.rows.filter(({ sureMg }) => sureMg !== null).length;
		}
		process.stdout.write(
			`${JSON.stringify({ bench: 'drift-board', nodes: count, judged: rows, firstMs: ms[0], thenMs: ms.slice(1) })}\n`
		);
	} finally {
		await store.close();
		await database.close();
	}
}

if (import.meta.url === pathToFileURL(process.argv[1] ?? '').href) {
	const all = memories();
	for (const count of SIZES) await measure(count, all);
}
