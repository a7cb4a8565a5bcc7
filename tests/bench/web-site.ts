import type { Store } from '$lib/server/store/connect';
import { bay, site, zone } from '$lib/server/store/schema';
import { bayPolygon } from '../support/seed';

export const WIDE = { slug: 'wide-field', bays: 2_000, rows: 40 } as const;

/** A site of 2,000 drawn bays in 40 rows and 8 zones, taken and free in turn. */
export async function makeWideSite(store: Store): Promise<number> {
	const nowMs = Date.now();
	const at = { latDeg: 47.6, lonDeg: -8.3, timezone: 'Etc/UTC', createdAtMs: nowMs };
	const [made] = await store.db.insert(site).values({ ...at, slug: WIDE.slug, name: 'Wide Field' });
	const siteId = made.insertId;
	const perRow = WIDE.bays / WIDE.rows;
	for (let z = 0; z < 8; z++) {
		const [{ insertId: zoneId }] = await store.db
			.insert(zone)
			.values({ siteId, code: `Z${z}`, name: `Zone ${z}` });
		const places = Array.from({ length: WIDE.bays / 8 }, (_, i) => ({
			row: z * 5 + Math.floor(i / perRow),
			column: i % perRow
		}));
		await store.db.insert(bay).values(
			places.map(({ row, column }) => ({
				...{ siteId, zoneId, createdAtMs: nowMs },
				code: `${row}-${column}`,
				geometry: JSON.stringify(bayPolygon(at.latDeg, at.lonDeg, column, row))
			}))
		);
	}
	await store.pool.query(
		`INSERT INTO bay_state (bay_id, site_id, state, since_ms, confidence_20, \`condition\`)
		 SELECT id, site_id, IF(id % 9 < 5, 'occupied', 'vacant'), ?, 19, 'in_service' FROM bay WHERE site_id = ?`,
		[nowMs - 3_600_000, siteId]
	);
	return siteId;
}

/** Turns the states of `count` bays over and says so in the change log, as one transaction of the pipeline would. */
export async function turnOver(store: Store, siteId: number, count: number): Promise<void> {
	const nowMs = Date.now();
	const [rows] = await store.pool.query(
		'SELECT id FROM bay WHERE site_id = ? ORDER BY RAND() LIMIT ?',
		[siteId, count]
	);
	const ids = (rows as { id: number }[]).map(({ id }) => id);
	await store.pool.query(
		`UPDATE bay_state SET state = IF(state = 'occupied', 'vacant', 'occupied'), since_ms = ? WHERE bay_id IN (?)`,
		[nowMs, ids]
	);
	const [[last]] = (await store.pool.query('SELECT last_change AS id FROM site WHERE id = ?', [
		siteId
	])) as unknown as [[{ id: number }]];
	await store.pool.query(
		'INSERT INTO `change` (site_id, id, kind, bay_id, recorded_at_ms) VALUES ?',
		[ids.map((bayId, at) => [siteId, last.id + 1 + at, 'condition', bayId, nowMs])]
	);
	await store.pool.query('UPDATE site SET last_change = ? WHERE id = ?', [
		last.id + ids.length,
		siteId
	]);
}
