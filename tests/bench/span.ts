/**
 * How long the readings behind a dossier's plots take by the span shown, ms: a day, a week, 30 days and a year of one
 * node that reports once a minute, 600 points. `npx tsx tests/bench/span.ts`; the ratio to a day is the figure.
 */
import * as readings from '../../src/lib/server/store/queries/readings';
import { insertTuples } from '../../src/lib/server/store/queries/bulk';
import { startDatabase } from '../support/database';
import { makeSite, openStore, SECRET } from '../support/ingest';
import { createSecret } from '../../src/lib/server/secret';

const HOUR_MS = 3_600_000;
const DAY_MS = 24 * HOUR_MS;
const SPANS = { day: 1, week: 7, month: 30, year: 365 };
const RUNS = 9;
/** Raw rows are written for so long; older ones a query of whole hours never touches. */
const RAW_DAYS = 8;
const AT_ONCE = 5_000;

const database = await startDatabase();
const store = openStore(database.url);
try {
	const site = await makeSite(store, createSecret(SECRET), { nodes: 1 });
	const { id } = site.nodes[0]!;
	const toMs = Math.floor(Date.now() / HOUR_MS) * HOUR_MS;
	const hours = Array.from({ length: 365 * 24 }, (_, i) => {
		const hourMs = toMs - (i + 1) * HOUR_MS;
		return `(${id},${hourMs},60,60000,-12000,420000,900,-260,6900,1100,-140,7100,9000,60,3600)`;
	});
	await fill(
		'INSERT INTO reading_hour (node_id,hour_ms,n,x_sum,y_sum,z_sum,x_min,y_min,z_min,x_max,y_max,z_max,temp_sum_dc,temp_n,battery_min_mv)',
		hours
	);
	const minutes = Array.from({ length: RAW_DAYS * 1_440 }, (_, i) => {
		const atMs = toMs - (i + 1) * 60_000;
		return `(${id},${atMs},1,${i},0,${1000 + (i % 7)},-200,7000,1,150,3600,-70,0)`;
	});
	await fill(
		'INSERT INTO reading (node_id,at_ms,boot,seq,`row`,x,y,z,polarity,temp_dc,battery_mv,rssi_dbm,flags)',
		minutes
	);
	const taken: Record<string, number> = {};
	for (const [name, days] of Object.entries(SPANS)) {
		const ms = [];
		for (let run = 0; run < RUNS; run++) {
			const beganMs = performance.now();
			const found = await readings.buckets(store.pool, id, toMs - days * DAY_MS, toMs, 600);
			ms.push(performance.now() - beganMs);
			if (found.length < 150) throw new Error(`${name}: ${found.length} buckets`);
		}
		taken[name] = Math.round((ms.sort((a, b) => a - b)[RUNS >> 1] ?? 0) * 10) / 10;
	}
	const ratio = Math.round((10 * (taken['year'] ?? 0)) / (taken['day'] ?? 1)) / 10;
	console.log(JSON.stringify({ bench: 'dossier span, ms', ...taken, yearToDay: ratio }));
} finally {
	await store.close();
	await database.close();
}

async function fill(head: string, tuples: readonly string[]): Promise<void> {
	for (let at = 0; at < tuples.length; at += AT_ONCE)
		await insertTuples(store.pool, head, tuples.slice(at, at + AT_ONCE));
}
