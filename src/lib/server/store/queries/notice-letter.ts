import type { NOTICE_ENDS, NOTICE_KINDS } from '../schema';
import { select, type Sql } from './bulk';

/** A notice with where it is and who has it, for mail and for the sheet. */
export interface NoticeRow {
	id: number;
	kind: (typeof NOTICE_KINDS)[number];
	kinds: string;
	awaitsProof: number;
	times: number;
	sinceMs: number;
	openedAtMs: number;
	deadlineMs: number;
	stage: number;
	facts: string;
	takenBy: number | null;
	takenAtMs: number | null;
	takerName: string | null;
	takerInitials: string | null;
	snoozedUntilMs: number | null;
	closedAtMs: number | null;
	closedHow: (typeof NOTICE_ENDS)[number] | null;
	nodeId: number | null;
	serial: string | null;
	profile: string | null;
	bay: string | null;
	personal: number | null;
	/** GeoJSON text. */
	geometry: string | null;
	zone: string | null;
	zoneName: string | null;
	siteId: number | null;
	site: string | null;
	siteName: string | null;
	timezone: string | null;
	latDeg: number | null;
	lonDeg: number | null;
	siteDemo: number | null;
	/** The site fires film refreshes by rule in its quiet hours. */
	scheduleOn: number | null;
	scheduleReasons: string | null;
	quietFromMin: number | null;
	quietToMin: number | null;
	/** Of the film refresh that is open for the node; null = none. */
	refreshState: string | null;
}

const ROWS = `SELECT n.id, n.kind, n.kinds, n.awaits_proof AS awaitsProof, n.times, n.since_ms AS sinceMs,
	n.opened_at_ms AS openedAtMs, n.deadline_ms AS deadlineMs, n.stage, n.facts, n.taken_by AS takenBy,
	n.taken_at_ms AS takenAtMs, t.name AS takerName, t.initials AS takerInitials,
	n.snoozed_until_ms AS snoozedUntilMs, n.closed_at_ms AS closedAtMs, n.closed_how AS closedHow,
	n.node_id AS nodeId, d.serial, d.profile_code AS profile, b.code AS bay, b.personal, b.geometry,
	z.code AS zone, z.name AS zoneName, s.id AS siteId, s.slug AS site, s.name AS siteName, s.timezone,
	s.lat_deg AS latDeg, s.lon_deg AS lonDeg, s.demo AS siteDemo, r.schedule_on AS scheduleOn,
	r.schedule_reasons AS scheduleReasons, s.quiet_from_min AS quietFromMin, s.quiet_to_min AS quietToMin,
	o.state AS refreshState
	FROM notice n
	LEFT JOIN site s ON s.id = n.site_id
	LEFT JOIN node d ON d.id = n.node_id
	LEFT JOIN bay b ON b.id = n.bay_id
	LEFT JOIN zone z ON z.id = b.zone_id
	LEFT JOIN person t ON t.id = n.taken_by
	LEFT JOIN refresh_settings r ON r.site_id = s.id
	LEFT JOIN refresh o ON o.open_node_id = n.node_id`;

export async function byIds(sql: Sql, ids: readonly number[]): Promise<NoticeRow[]> {
	if (ids.length === 0) return [];
	return await select<NoticeRow>(sql, `${ROWS} WHERE n.id IN (?) ORDER BY n.deadline_ms, n.id`, [
		ids
	]);
}

export interface Within {
	sites: 'all' | ReadonlySet<number>;
	/** Notices of the installation, without a site. */
	installation: boolean;
}

/** Open notices within reach, nearest deadline first. */
export async function openWithin(sql: Sql, within: Within, limit: number): Promise<NoticeRow[]> {
	return await select<NoticeRow>(
		sql,
		`${ROWS} WHERE n.closed_at_ms IS NULL AND ${reach(within)} ORDER BY n.deadline_ms, n.id LIMIT ?`,
		[limit]
	);
}

/** Closed since an instant, the newest first; what was only told together with others is left out. */
export async function closedWithin(
	sql: Sql,
	within: Within,
	sinceMs: number,
	limit: number
): Promise<NoticeRow[]> {
	return await select<NoticeRow>(
		sql,
		`${ROWS} WHERE n.closed_at_ms > ? AND n.closed_how <> 'folded' AND ${reach(within)}
		 ORDER BY n.closed_at_ms DESC LIMIT ?`,
		[sinceMs, limit]
	);
}

/** Site ids are numbers of our own: no text of anybody's gets into the statement. */
function reach({ sites, installation }: Within): string {
	const of =
		sites === 'all' ? 's.removed_at_ms IS NULL AND n.site_id IS NOT NULL' : siteList(sites);
	return installation ? `(${of} OR n.site_id IS NULL)` : `(${of})`;
}
const siteList = (sites: ReadonlySet<number>): string =>
	`n.site_id IN (${[-1, ...sites].map(Number).join(',')})`;

export interface EntryRow {
	noticeId: number;
	atMs: number;
	what: string;
	detail: string;
	personId: number | null;
	initials: string | null;
}

/** Histories of these notices, oldest first. */
export async function entries(sql: Sql, ids: readonly number[]): Promise<EntryRow[]> {
	if (ids.length === 0) return [];
	return await select<EntryRow>(
		sql,
		`SELECT e.notice_id AS noticeId, e.at_ms AS atMs, e.what, e.detail, e.person_id AS personId, p.initials
		 FROM notice_entry e LEFT JOIN person p ON p.id = e.person_id WHERE e.notice_id IN (?) ORDER BY e.id`,
		[ids]
	);
}

/** How many were opened and closed since an instant. */
export async function since(sql: Sql, within: Within, sinceMs: number) {
	const rows = await select<{ opened: number; healed: number; taken: number }>(
		sql,
		`SELECT COALESCE(SUM(n.opened_at_ms > ? AND n.closed_at_ms IS NULL), 0) AS opened,
			COALESCE(SUM(n.closed_at_ms > ? AND n.closed_how <> 'folded'), 0) AS healed,
			COALESCE(SUM(n.taken_at_ms > ? AND n.closed_at_ms IS NULL), 0) AS taken
		 FROM notice n LEFT JOIN site s ON s.id = n.site_id
		 WHERE (n.closed_at_ms IS NULL OR n.closed_at_ms > ?) AND ${reach(within)}`,
		[sinceMs, sinceMs, sinceMs, sinceMs]
	);
	const row = rows[0];
	return {
		opened: Number(row?.opened ?? 0),
		closed: Number(row?.healed ?? 0),
		taken: Number(row?.taken ?? 0)
	};
}

/** When the person last looked here, and now. */
export async function swapLook(
	sql: Sql,
	look: { personId: number; siteId: number; atMs: number }
): Promise<number | null> {
	const rows = await select<{ atMs: number }>(
		sql,
		'SELECT at_ms AS atMs FROM notice_look WHERE person_id = ? AND site_id = ?',
		[look.personId, look.siteId]
	);
	await sql.query(
		`INSERT INTO notice_look (person_id, site_id, at_ms) VALUES (?, ?, ?)
		 ON DUPLICATE KEY UPDATE at_ms = VALUES(at_ms)`,
		[look.personId, look.siteId, look.atMs]
	);
	return rows[0]?.atMs ?? null;
}
