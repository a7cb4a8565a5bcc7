import { run, select, type Sql } from './bulk';

/** A stretch of time in which the server could hear nodes. */
export interface Stretch {
	fromMs: number;
	toMs: number;
}

/** Stretches that end after `sinceMs`, rising. */
export async function since(sql: Sql, sinceMs: number): Promise<Stretch[]> {
	return await select(
		sql,
		'SELECT from_ms AS fromMs, to_ms AS toMs FROM hearing WHERE to_ms > ? ORDER BY from_ms',
		[sinceMs]
	);
}

/** Begins or lengthens the stretch that begins at `fromMs`. */
export async function extend(sql: Sql, stretch: Stretch): Promise<void> {
	await run(
		sql,
		'INSERT INTO hearing (from_ms, to_ms) VALUES (?, ?) ON DUPLICATE KEY UPDATE to_ms = GREATEST(to_ms, VALUES(to_ms))',
		[stretch.fromMs, stretch.toMs]
	);
}

/** How much of [fromMs, toMs) lies inside the stretches, which rise and do not overlap. */
export function heardMs(stretches: readonly Stretch[], fromMs: number, toMs: number): number {
	let sum = 0;
	for (let i = stretches.length - 1; i >= 0; i -= 1) {
		const s = stretches[i] as Stretch;
		if (s.toMs <= fromMs) break;
		sum += Math.max(0, Math.min(s.toMs, toMs) - Math.max(s.fromMs, fromMs));
	}
	return sum;
}

export interface SiteHearing {
	/** Nodes in service or learning, and how many of them are not silent. */
	nodesExpected: number;
	nodesHeard: number;
	/** Arrival of the newest message of any of them. */
	asOfMs: number | null;
}

/** For a copy that runs no pipeline: what the stored states say of a site's nodes. */
export async function ofSite(sql: Sql, siteId: number): Promise<SiteHearing> {
	const rows = await select<SiteHearing>(
		sql,
		`SELECT COUNT(*) AS nodesExpected,
			COUNT(CASE WHEN f.heard_at_ms IS NOT NULL AND s.\`condition\` <> 'silent' THEN 1 END) AS nodesHeard,
			MAX(f.heard_at_ms) AS asOfMs
		 FROM node n JOIN bay_state s ON s.bay_id = n.bay_id LEFT JOIN node_fast f ON f.node_id = n.id
		 WHERE n.site_id = ? AND n.withdrawn_at_ms IS NULL`,
		[siteId]
	);
	return rows[0] ?? { nodesExpected: 0, nodesHeard: 0, asOfMs: null };
}
