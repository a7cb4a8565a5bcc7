import { select, type Sql } from './bulk';
import { PERSONAL_KEPT_MS } from './events';

export interface HistoryPoint {
	bayId: number;
	bay: string;
	atMs: number;
	state: 'vacant' | 'occupied' | 'unknown';
}

export interface StayFilter {
	siteId: number;
	bay: string | null;
	/** [fromMs, toMs). */
	fromMs: number;
	toMs: number;
	personal: boolean;
	nowMs: number;
}

export interface BayRef {
	id: number;
	code: string;
	personal: number;
}

/** Bays of the site by id, removed ones too: their history stays. */
export async function bays(
	sql: Sql,
	f: StayFilter,
	afterId: number,
	limit: number
): Promise<BayRef[]> {
	return await select(
		sql,
		`SELECT id, code, personal FROM bay WHERE site_id = ? AND id >= ?
			${f.bay === null ? '' : 'AND code = ?'} ${f.personal ? '' : 'AND personal = FALSE'}
		 ORDER BY id LIMIT ?`,
		[f.siteId, afterId, ...(f.bay === null ? [] : [f.bay]), limit]
	);
}

const EFFECTIVE = 'h.voided_at_ms IS NULL';

/**
 * Effective history of one bay that bears on [fromMs, toMs): from the last entry before it that is not
 * 'occupied' (so that a stay under way shows its true start) to the first after it that ends one.
 */
export async function points(sql: Sql, bay: BayRef, f: StayFilter): Promise<HistoryPoint[]> {
	const keptFromMs = Number(bay.personal) === 1 ? f.nowMs - PERSONAL_KEPT_MS : 0;
	const rows = await select<Omit<HistoryPoint, 'bayId' | 'bay'>>(
		sql,
		`SELECT h.at_ms AS atMs, h.state FROM history h WHERE h.bay_id = ? AND ${EFFECTIVE}
			AND h.at_ms >= GREATEST(?, COALESCE((SELECT MAX(p.at_ms) FROM history p WHERE p.bay_id = ?
				AND p.voided_at_ms IS NULL AND p.state <> 'occupied' AND p.at_ms <= ?), 0))
			AND h.at_ms <= COALESCE((SELECT MIN(n.at_ms) FROM history n WHERE n.bay_id = ?
				AND n.voided_at_ms IS NULL AND n.state <> 'occupied' AND n.at_ms >= ?), ?)
		 ORDER BY h.at_ms, h.id`,
		[bay.id, keptFromMs, bay.id, f.fromMs, bay.id, f.toMs, Number.MAX_SAFE_INTEGER]
	);
	return rows.map((row) => ({ bayId: bay.id, bay: bay.code, ...row }));
}
