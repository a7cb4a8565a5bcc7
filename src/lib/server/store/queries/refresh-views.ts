import { select, type Sql } from './bulk';
import { read, type RefreshRow, type RefreshState } from './refreshes';

export interface NamedRefresh extends RefreshRow {
	serial: string;
	bay: string;
	zone: string;
	site: string;
	personal: boolean;
	timezone: string;
	bayState: 'vacant' | 'occupied' | 'unknown';
	baySinceMs: number | null;
}

const MORE = `, n.serial, y.code AS bay, z.code AS zone, s.slug AS site, y.personal, s.timezone,
	COALESCE(b.state, 'unknown') AS bayState, b.since_ms AS baySinceMs`;
const JOINS = `JOIN node n ON n.id = r.node_id JOIN bay y ON y.id = r.bay_id JOIN zone z ON z.id = y.zone_id
	JOIN site s ON s.id = r.site_id LEFT JOIN bay_state b ON b.bay_id = r.bay_id`;

const named = async (sql: Sql, where: string, values: readonly unknown[]) => {
	const rows = await read<Omit<NamedRefresh, keyof RefreshRow>>(
		sql,
		MORE,
		`${JOINS} WHERE ${where}`,
		values
	);
	return rows.map((row): NamedRefresh => ({ ...row, personal: Number(row.personal) === 1 }));
};

export async function byId(sql: Sql, id: number): Promise<NamedRefresh | null> {
	return (await named(sql, 'r.id = ?', [id]))[0] ?? null;
}

export interface RefreshPage {
	sites: 'all' | readonly number[];
	personal: boolean;
	state: RefreshState | null;
	/** Ids under it; null = from the newest on. */
	beforeId: number | null;
	limit: number;
}

/** Newest first. */
export async function page(sql: Sql, o: RefreshPage): Promise<NamedRefresh[]> {
	if (o.sites !== 'all' && o.sites.length === 0) return [];
	const terms = ['s.removed_at_ms IS NULL'];
	const values: unknown[] = [];
	const when = (term: string, ...given: unknown[]) => {
		terms.push(term);
		values.push(...given);
	};
	if (o.sites !== 'all') when('r.site_id IN (?)', o.sites);
	if (!o.personal) when('y.personal = 0');
	if (o.state !== null) when('r.state = ?', o.state);
	if (o.beforeId !== null) when('r.id < ?', o.beforeId);
	return await named(sql, `${terms.join(' AND ')} ORDER BY r.id DESC LIMIT ?`, [
		...values,
		o.limit
	]);
}

/** For the sheet: everything open, and what ended lately; newest first. */
export async function ofSite(
	sql: Sql,
	siteId: number,
	personal: boolean,
	endedSinceMs: number
): Promise<NamedRefresh[]> {
	return await named(
		sql,
		`r.site_id = ? AND (? OR y.personal = 0) AND (r.ended_at_ms IS NULL OR r.ended_at_ms > ?) ORDER BY r.id DESC LIMIT 3000`,
		[siteId, personal, endedSinceMs]
	);
}

/** Names of people and keys behind actors. */
export async function actorNames(
	sql: Sql,
	actors: readonly string[]
): Promise<Map<string, string>> {
	const ids = (kind: string) => [
		...new Set(
			actors.filter((a) => a.startsWith(`${kind}:`)).map((a) => Number(a.slice(kind.length + 1)))
		),
		0
	];
	const people = await select<{ id: number; name: string }>(
		sql,
		'SELECT id, name FROM person WHERE id IN (?)',
		[ids('person')]
	);
	const keys = await select<{ id: number; name: string }>(
		sql,
		'SELECT id, name FROM api_key WHERE id IN (?)',
		[ids('key')]
	);
	return new Map([
		...people.map(({ id, name }) => [`person:${id}`, name] as const),
		...keys.map(({ id, name }) => [`key:${id}`, `key ${name}`] as const)
	]);
}

export interface BulkRow {
	id: number;
	siteId: number;
	what: string;
	reason: string;
	state: 'running' | 'paused' | 'called_off' | 'done';
	/** JSON text. */
	leftOut: string;
	askedBy: string;
	askedAtMs: number;
	endedAtMs: number | null;
	/** How many of its film refreshes stand where: 'proved:12,waiting:3'. */
	counts: string | null;
}

const BULK = `SELECT k.id, k.site_id AS siteId, k.what, k.reason, k.state, k.left_out AS leftOut, k.asked_by AS askedBy,
	k.asked_at_ms AS askedAtMs, k.ended_at_ms AS endedAtMs,
	(SELECT GROUP_CONCAT(CONCAT(g.state, ':', g.n)) FROM (SELECT bulk_id, state, COUNT(*) AS n FROM refresh GROUP BY bulk_id, state) g
	 WHERE g.bulk_id = k.id) AS counts FROM refresh_bulk k`;

export async function bulks(sql: Sql, siteId: number, sinceMs: number): Promise<BulkRow[]> {
	return await select(
		sql,
		`${BULK} WHERE k.site_id = ? AND (k.ended_at_ms IS NULL OR k.ended_at_ms > ?) ORDER BY k.id DESC LIMIT 20`,
		[siteId, sinceMs]
	);
}

export async function bulkById(sql: Sql, siteId: number, id: number): Promise<BulkRow | null> {
	const rows = await select<BulkRow>(sql, `${BULK} WHERE k.site_id = ? AND k.id = ? FOR UPDATE`, [
		siteId,
		id
	]);
	return rows[0] ?? null;
}

/** A node that a bulk order might take. */
export interface BulkNode {
	nodeId: number;
	bay: string;
	usualPeriodS: number;
	profileCode: string;
	profileBody: string;
	withdrawnAtMs: number | null;
	heardBoot: number | null;
	batteryMv: number | null;
	condition: string | null;
	state: 'vacant' | 'occupied' | 'unknown';
	openId: number | null;
	bayId: number;
}

export async function bulkNodes(
	sql: Sql,
	siteId: number,
	which: { zone: string } | { bays: readonly string[] },
	personal: boolean
): Promise<BulkNode[]> {
	const byZone = 'zone' in which;
	return await select(
		sql,
		`SELECT n.id AS nodeId, y.id AS bayId, y.code AS bay, n.usual_period_s AS usualPeriodS, n.profile_code AS profileCode,
			p.body AS profileBody, n.withdrawn_at_ms AS withdrawnAtMs, f.heard_boot AS heardBoot, f.battery_mv AS batteryMv,
			b.condition, COALESCE(b.state, 'unknown') AS state, o.id AS openId
		 FROM bay y JOIN zone z ON z.id = y.zone_id JOIN node n ON n.bay_id = y.id AND n.withdrawn_at_ms IS NULL
		 JOIN profile p ON p.code = n.profile_code LEFT JOIN node_fast f ON f.node_id = n.id
		 LEFT JOIN bay_state b ON b.bay_id = y.id LEFT JOIN refresh o ON o.open_node_id = n.id
		 WHERE y.site_id = ? AND y.removed_at_ms = 0 AND (? OR y.personal = 0) AND ${byZone ? 'z.code = ?' : 'y.code IN (?)'} ORDER BY y.code`,
		[siteId, personal, byZone ? which.zone : which.bays]
	);
}
