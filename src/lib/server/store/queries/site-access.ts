import { run, select, type Sql } from './bulk';

export interface AccessRow {
	parking: string;
	wayIn: string;
	keysAt: string;
	contact: string;
	version: number;
	changedAtMs: number;
}
export interface PermitRow {
	name: string;
	number: string;
	lastDay: string | null;
}

/** Notes and permits of a site; null where nobody has written any. */
export async function ofSite(
	sql: Sql,
	siteId: number
): Promise<{ access: AccessRow | null; permits: PermitRow[] }> {
	const rows = await select<AccessRow>(
		sql,
		`SELECT parking, way_in AS wayIn, keys_at AS keysAt, contact, version, changed_at_ms AS changedAtMs
		 FROM site_access WHERE site_id = ?`,
		[siteId]
	);
	const permits = await select<PermitRow>(
		sql,
		'SELECT name, number, last_day AS lastDay FROM site_permit WHERE site_id = ? ORDER BY place',
		[siteId]
	);
	return { access: rows[0] ?? null, permits };
}

/** Writes all of it; false when somebody else has written since the version that was seen. */
export async function save(
	sql: Sql,
	siteId: number,
	to: Omit<AccessRow, 'changedAtMs'> & { permits: readonly PermitRow[] },
	nowMs: number
): Promise<boolean> {
	await select(sql, 'SELECT id FROM site WHERE id = ? FOR UPDATE', [siteId]);
	const { access } = await ofSite(sql, siteId);
	if ((access?.version ?? 0) !== to.version) return false;
	await run(
		sql,
		`INSERT INTO site_access (site_id, parking, way_in, keys_at, contact, version, changed_at_ms)
		 VALUES (?, ?, ?, ?, ?, ?, ?) ON DUPLICATE KEY UPDATE parking = VALUES(parking), way_in = VALUES(way_in),
			keys_at = VALUES(keys_at), contact = VALUES(contact), version = VALUES(version), changed_at_ms = VALUES(changed_at_ms)`,
		[siteId, to.parking, to.wayIn, to.keysAt, to.contact, to.version + 1, nowMs]
	);
	await run(sql, 'DELETE FROM site_permit WHERE site_id = ?', [siteId]);
	if (to.permits.length > 0)
		await run(sql, 'INSERT INTO site_permit (site_id, place, name, number, last_day) VALUES ?', [
			to.permits.map(({ name, number, lastDay }, place) => [siteId, place, name, number, lastDay])
		]);
	return true;
}
