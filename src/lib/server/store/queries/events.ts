import { select, type Sql } from './bulk';

/** What the log keeps of a bay that is tied to one household (product.md, 'Cautions'). */
export const PERSONAL_KEPT_MS = 24 * 3_600_000;

export interface EventRow {
	id: number;
	bay: string;
	type: 'arrival' | 'departure' | 'unknown' | 'known' | 'settled' | 'voided';
	state: 'vacant' | 'occupied' | 'unknown';
	atMs: number;
	recordedAtMs: number;
	confidence20: number | null;
	uncertaintyS: number;
	late: number;
	voids: number | null;
}

const COLUMNS = `e.id, b.code AS bay, e.type, e.state, e.at_ms AS atMs, e.recorded_at_ms AS recordedAtMs,
	e.confidence_20 AS confidence20, e.uncertainty_s AS uncertaintyS, e.late, e.voids`;

export interface EventFilter {
	siteId: number;
	/** Ids in (afterId, upTo]: the unbroken run of the log. */
	afterId: number;
	upTo: number;
	fromMs: number | null;
	/** Exclusive. */
	toMs: number | null;
	bay: string | null;
	/** Leaves voided ones and their voiders out. */
	effective: boolean;
	/** Whether personal bays are among them. */
	personal: boolean;
	nowMs: number;
	limit: number;
}

/** By id. Events of a personal bay are told for 24 h only. */
export async function page(sql: Sql, f: EventFilter): Promise<EventRow[]> {
	const where = ['e.site_id = ?', 'e.id > ?', 'e.id <= ?'];
	const values: unknown[] = [f.siteId, f.afterId, f.upTo];
	const add = (condition: string, ...more: unknown[]): void => {
		where.push(condition);
		values.push(...more);
	};
	if (f.fromMs !== null) add('e.at_ms >= ?', f.fromMs);
	if (f.toMs !== null) add('e.at_ms < ?', f.toMs);
	if (f.bay !== null) add('b.code = ?', f.bay);
	if (f.personal) add('(b.personal = FALSE OR e.at_ms > ?)', f.nowMs - PERSONAL_KEPT_MS);
	else add('b.personal = FALSE');
	if (f.effective) {
		add(
			`e.type <> 'voided' AND NOT EXISTS (SELECT 1 FROM event v WHERE v.site_id = e.site_id AND v.voids = e.id AND v.id <= ?)`,
			f.upTo
		);
	}
	return await select(
		sql,
		`SELECT ${COLUMNS} FROM event e JOIN bay b ON b.id = e.bay_id
		 WHERE ${where.join(' AND ')} ORDER BY e.id LIMIT ?`,
		[...values, f.limit]
	);
}

export async function byIds(sql: Sql, siteId: number, ids: readonly number[]): Promise<EventRow[]> {
	if (ids.length === 0) return [];
	return await select(
		sql,
		`SELECT ${COLUMNS} FROM event e JOIN bay b ON b.id = e.bay_id WHERE e.site_id = ? AND e.id IN (?)`,
		[siteId, ids]
	);
}

export interface NamedChange {
	id: number;
	kind: 'event' | 'bay' | 'condition' | 'geometry' | 'closure' | 'removed' | 'site';
	bay: string | null;
	node: string | null;
	recordedAtMs: number;
	personal: number;
}

/** Changes of the log in (afterId, upTo] with the names that people and programs know. */
export async function namedChanges(
	sql: Sql,
	siteId: number,
	afterId: number,
	upTo: number,
	limit: number
): Promise<NamedChange[]> {
	return await select(
		sql,
		`SELECT c.id, c.kind, b.code AS bay, n.serial AS node, c.recorded_at_ms AS recordedAtMs,
			COALESCE(b.personal, FALSE) AS personal
		 FROM \`change\` c LEFT JOIN bay b ON b.id = c.bay_id LEFT JOIN node n ON n.id = c.node_id
		 WHERE c.site_id = ? AND c.id > ? AND c.id <= ? ORDER BY c.id LIMIT ?`,
		[siteId, afterId, upTo, limit]
	);
}
