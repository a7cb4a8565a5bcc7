import { run, select, type Sql } from './bulk';

/** Living sites with how far their log is taken into notices; for the worker to see where to look. */
export interface SiteToLook {
	id: number;
	slug: string;
	name: string;
	timezone: string;
	graceS: number;
	createdAtMs: number;
	demo: number;
	lastChange: number;
	changeId: number | null;
	lookedAtMs: number | null;
}

export async function sites(sql: Sql): Promise<SiteToLook[]> {
	return await select<SiteToLook>(
		sql,
		`SELECT s.id, s.slug, s.name, s.timezone, s.grace_s AS graceS, s.created_at_ms AS createdAtMs,
			s.demo, s.last_change AS lastChange, c.change_id AS changeId, c.looked_at_ms AS lookedAtMs
		 FROM site s LEFT JOIN notice_cursor c ON c.site_id = s.id
		 WHERE s.removed_at_ms IS NULL ORDER BY s.id`
	);
}

export interface Cursor {
	changeId: number;
	lookedAtMs: number;
}

/** The site's cursor, locked to the end of the transaction: of two workers the second waits. */
export async function lockCursor(sql: Sql, siteId: number): Promise<Cursor> {
	await run(
		sql,
		`INSERT INTO notice_cursor (site_id, change_id, looked_at_ms) VALUES (?, 0, 0)
		 ON DUPLICATE KEY UPDATE site_id = site_id`,
		[siteId]
	);
	const rows = await select<Cursor>(
		sql,
		'SELECT change_id AS changeId, looked_at_ms AS lookedAtMs FROM notice_cursor WHERE site_id = ? FOR UPDATE',
		[siteId]
	);
	return rows[0] ?? { changeId: 0, lookedAtMs: 0 };
}

export async function setCursor(sql: Sql, siteId: number, to: Cursor): Promise<void> {
	await run(sql, 'UPDATE notice_cursor SET change_id = ?, looked_at_ms = ? WHERE site_id = ?', [
		to.changeId,
		to.lookedAtMs,
		siteId
	]);
}

/** A placed node whose bay shows that it wants a look. */
export interface TroubledRow {
	nodeId: number;
	bayId: number;
	bay: string;
	zone: string;
	gateway: string | null;
	network: string | null;
	condition: string;
	also: string;
	doubtReason: string | null;
	doubtSinceMs: number | null;
	heardAtMs: number | null;
	batteryMv: number | null;
}

const NODES = `FROM node n
	JOIN bay b ON b.id = n.bay_id AND b.removed_at_ms = 0
	JOIN zone z ON z.id = b.zone_id
	JOIN bay_state s ON s.bay_id = b.id
	LEFT JOIN node_fast f ON f.node_id = n.id
	LEFT JOIN node_network w ON w.node_id = n.id
	WHERE n.site_id = ? AND n.withdrawn_at_ms IS NULL`;

/**
 * Nodes in a condition or with a mark that a notice tells of, bays under a closure left out (method 4),
 * and those named in `others` in any condition.
 */
export async function troubled(
	sql: Sql,
	siteId: number,
	o: { nowMs: number; doubt: string; others: readonly number[] }
): Promise<TroubledRow[]> {
	return await select<TroubledRow>(
		sql,
		`SELECT n.id AS nodeId, b.id AS bayId, b.code AS bay, z.code AS zone, n.gateway, w.network, s.condition, s.also,
			s.doubt_reason AS doubtReason, s.doubt_since_ms AS doubtSinceMs, f.heard_at_ms AS heardAtMs,
			f.battery_mv AS batteryMv
		 ${NODES}
		 AND (s.condition IN ('silent', 'inverted', 'clipped', 'refresh_due', 'drifting')
			OR s.also REGEXP 'silent|inverted|clipped|refresh_due|drifting|low_cell|clock_off'
			OR s.doubt_reason = ? OR n.id IN (?))
		 AND NOT EXISTS (SELECT 1 FROM closure c WHERE c.bay_id = b.id AND c.from_ms <= ? AND c.to_ms > ?
			AND c.lifted_at_ms IS NULL)`,
		[siteId, o.doubt, o.others.length === 0 ? [0] : o.others, o.nowMs, o.nowMs]
	);
}

/** Placed nodes of a site in all, by gateway label, network address and zone. */
export async function totals(sql: Sql, siteId: number) {
	const rows = await select<{
		gateway: string | null;
		network: string | null;
		zone: string;
		n: number;
	}>(
		sql,
		`SELECT n.gateway, w.network, z.code AS zone, COUNT(*) AS n ${NODES}
		 GROUP BY n.gateway, w.network, z.code`,
		[siteId]
	);
	const by = (label: (row: (typeof rows)[number]) => string | null) => {
		const sums = new Map<string, number>();
		for (const row of rows) {
			const key = label(row);
			if (key !== null) sums.set(key, (sums.get(key) ?? 0) + Number(row.n));
		}
		return sums;
	};
	return {
		all: rows.reduce((sum, { n }) => sum + Number(n), 0),
		gateway: by(({ gateway }) => gateway),
		network: by(({ network }) => network),
		zone: by(({ zone }) => zone)
	};
}

/** Nodes of which at least `least` refused frames were kept since an instant (20 an hour at most are). */
export async function refused(sql: Sql, siteId: number, sinceMs: number, least: number) {
	const rows = await select<{ nodeId: number; n: number; why: string }>(
		sql,
		`SELECT n.id AS nodeId, COUNT(*) AS n, MAX(r.reason) AS why
		 FROM node n JOIN rejected r ON r.serial = n.serial AND r.at_ms > ?
		 WHERE n.site_id = ? AND n.bay_id IS NOT NULL AND n.withdrawn_at_ms IS NULL
		 GROUP BY n.id HAVING COUNT(*) >= ?`,
		[sinceMs, siteId, least]
	);
	return new Map(rows.map(({ nodeId, n, why }) => [nodeId, { n: Number(n), why }]));
}

/** The last proof of each node since an instant: what it said and when, and whether somebody was there since. */
export async function proofs(sql: Sql, siteId: number, sinceMs: number) {
	return await select<{
		nodeId: number;
		state: 'proved' | 'not_cured';
		endedAtMs: number;
		visited: number;
	}>(
		sql,
		`SELECT r.node_id AS nodeId, r.state, r.ended_at_ms AS endedAtMs,
			EXISTS (SELECT 1 FROM visit_request v WHERE v.bay_id = r.bay_id AND v.ended_at_ms > r.ended_at_ms) AS visited
		 FROM refresh r JOIN (
			SELECT node_id, MAX(id) AS id FROM refresh
			WHERE site_id = ? AND state IN ('proved', 'not_cured') AND ended_at_ms > ? GROUP BY node_id
		 ) last ON last.id = r.id`,
		[siteId, sinceMs]
	);
}

/** Whether a film refresh ended or a visit was closed since the last look. */
export async function endedSince(sql: Sql, siteId: number, sinceMs: number): Promise<boolean> {
	const rows = await select<{ n: number }>(
		sql,
		`SELECT EXISTS (SELECT 1 FROM refresh WHERE ended_at_ms > ? AND site_id = ?)
			OR EXISTS (SELECT 1 FROM visit_request WHERE ended_at_ms > ? AND site_id = ?) AS n`,
		[sinceMs, siteId, sinceMs, siteId]
	);
	return Number(rows[0]?.n ?? 0) === 1;
}

/** Which of these nodes lie in no bay any more. */
export async function gone(sql: Sql, nodeIds: readonly number[]): Promise<Set<number>> {
	if (nodeIds.length === 0) return new Set();
	const rows = await select<{ id: number }>(
		sql,
		'SELECT id FROM node WHERE id IN (?) AND (withdrawn_at_ms IS NOT NULL OR bay_id IS NULL)',
		[nodeIds]
	);
	return new Set(rows.map(({ id }) => id));
}
