import { select, type Sql } from './bulk';

export interface Heard {
	siteId: number;
	/** The newest thing heard of any node of the site; null = nothing yet. */
	newestMs: number | null;
	/** Placed and not withdrawn. */
	expected: number;
	/** Of these, heard within three of their reporting periods (5 min at the least). */
	heard: number;
	/** The shortest reporting period among them, s. */
	shortestPeriodS: number | null;
}

const SILENT_AFTER = 'GREATEST(3000 * n.period_s, 300000)';

/** One row a node: no readings, no events are touched. */
export async function heard(sql: Sql, siteId: number, nowMs: number): Promise<Heard> {
	const rows = await select<Omit<Heard, 'siteId'>>(
		sql,
		`SELECT CAST(MAX(f.heard_at_ms) AS SIGNED) AS newestMs, COUNT(*) AS expected,
			CAST(COALESCE(SUM(f.heard_at_ms >= ? - ${SILENT_AFTER}), 0) AS SIGNED) AS heard,
			MIN(n.period_s) AS shortestPeriodS
		 FROM node n LEFT JOIN node_fast f ON f.node_id = n.id
		 WHERE n.site_id = ? AND n.bay_id IS NOT NULL AND n.withdrawn_at_ms IS NULL`,
		[nowMs, siteId]
	);
	const row = rows[0];
	return {
		siteId,
		newestMs: row?.newestMs ?? null,
		expected: Number(row?.expected ?? 0),
		heard: Number(row?.heard ?? 0),
		shortestPeriodS: row?.shortestPeriodS ?? null
	};
}
