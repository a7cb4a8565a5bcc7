import { eq } from 'drizzle-orm';
import { mailSetting, person } from '../schema';
import type { ROLES } from '../schema';
import { select, type Sql } from './bulk';
import type { Db } from './people';

type Role = (typeof ROLES)[number];

/** A person who may be mailed, with what they have set (null: the defaults of their role). */
export interface Mailable {
	id: number;
	email: string;
	name: string;
	initials: string;
	role: Role;
	demo: number;
	language: string;
	timezone: string | null;
	allSites: number;
	/** Comma separated ids. */
	siteIds: string | null;
	paces: string | null;
	sites: string | null;
	quietFromMin: number | null;
	quietToMin: number | null;
	quietWeekends: number | null;
	dailyAtMin: number | null;
	deputyId: number | null;
	offAtMs: number | null;
}

const MAILABLE = `SELECT p.id, p.email, p.name, p.initials, p.role, p.demo, p.language, p.timezone,
	p.all_sites AS allSites,
	(SELECT GROUP_CONCAT(ps.site_id) FROM person_site ps WHERE ps.person_id = p.id) AS siteIds,
	m.paces, m.sites, m.quiet_from_min AS quietFromMin, m.quiet_to_min AS quietToMin,
	m.quiet_weekends AS quietWeekends, m.daily_at_min AS dailyAtMin, m.deputy_id AS deputyId,
	m.off_at_ms AS offAtMs
	FROM person p LEFT JOIN mail_setting m ON m.person_id = p.id
	WHERE p.switched_off_at_ms IS NULL`;

/** Everybody who is here: a small table, read whole. */
export async function all(sql: Sql): Promise<Mailable[]> {
	return await select<Mailable>(sql, `${MAILABLE} ORDER BY p.id`);
}

export async function byId(sql: Sql, id: number): Promise<Mailable | null> {
	const rows = await select<Mailable>(sql, `${MAILABLE} AND p.id = ?`, [id]);
	return rows[0] ?? null;
}

export interface SettingRow {
	paces: string;
	sites: string | null;
	quietFromMin: number;
	quietToMin: number;
	quietWeekends: boolean;
	dailyAtMin: number;
	deputyId: number | null;
	offAtMs: number | null;
}

export async function save(
	db: Db,
	personId: number,
	setting: SettingRow,
	own: { language: string; timezone: string | null }
): Promise<void> {
	await db
		.insert(mailSetting)
		.values({ personId, ...setting })
		.onDuplicateKeyUpdate({ set: setting });
	await db.update(person).set(own).where(eq(person.id, personId));
}
