import { run, select, type Sql } from './bulk';

/** A site's rules on pulses as stored; null = never set. */
export interface StoredSettings {
	ownApproval: boolean;
	mostAtOnce: number;
	holdOffH: number;
	scheduleOn: boolean;
	scheduleReasons: string;
	mostANight: number;
	changedBy: string;
	changedAtMs: number;
}

export interface SiteSettings {
	siteId: number;
	timezone: string;
	quietFromMin: number;
	quietToMin: number;
	pairRule: 'calibrate' | 'diagnose' | 'never';
	stored: StoredSettings | null;
}

type Raw = Omit<SiteSettings, 'stored'> & {
	[K in keyof StoredSettings]: StoredSettings[K] extends boolean
		? number
		: StoredSettings[K] | null;
};

const toSettings = (raw: Raw): SiteSettings => {
	const { siteId, timezone, quietFromMin, quietToMin, pairRule } = raw;
	const { mostAtOnce, holdOffH, scheduleReasons, mostANight, changedBy, changedAtMs } = raw;
	return {
		...{ siteId, timezone, quietFromMin, quietToMin, pairRule },
		stored:
			mostAtOnce === null ||
			holdOffH === null ||
			scheduleReasons === null ||
			mostANight === null ||
			changedBy === null ||
			changedAtMs === null
				? null
				: {
						...{ mostAtOnce, holdOffH, scheduleReasons, mostANight, changedBy, changedAtMs },
						ownApproval: raw.ownApproval === 1,
						scheduleOn: raw.scheduleOn === 1
					}
	};
};

/** Of one site, or of every living one. */
export async function settings(sql: Sql, siteId: number | null): Promise<SiteSettings[]> {
	const rows = await select<Raw>(
		sql,
		`SELECT s.id AS siteId, s.timezone, s.quiet_from_min AS quietFromMin, s.quiet_to_min AS quietToMin, s.pair_rule AS pairRule,
			e.own_approval AS ownApproval, e.most_at_once AS mostAtOnce, e.hold_off_h AS holdOffH, e.schedule_on AS scheduleOn,
			e.schedule_reasons AS scheduleReasons, e.most_a_night AS mostANight, e.changed_by AS changedBy, e.changed_at_ms AS changedAtMs
		 FROM site s LEFT JOIN refresh_settings e ON e.site_id = s.id WHERE ${siteId === null ? 's.removed_at_ms IS NULL' : 's.id = ?'}`,
		siteId === null ? [] : [siteId]
	);
	return rows.map(toSettings);
}

/** Quiet hours and the rule on pairs stand with the site, the rest apart. */
export async function put(sql: Sql, s: SiteSettings & { stored: StoredSettings }): Promise<void> {
	const { stored } = s;
	await run(
		sql,
		'UPDATE site SET quiet_from_min = ?, quiet_to_min = ?, pair_rule = ? WHERE id = ?',
		[s.quietFromMin, s.quietToMin, s.pairRule, s.siteId]
	);
	const set = (c: string) => `${c} = VALUES(${c})`;
	const columns = [
		'own_approval',
		'most_at_once',
		'hold_off_h',
		'schedule_on',
		'schedule_reasons',
		'most_a_night',
		'changed_by',
		'changed_at_ms'
	];
	await run(
		sql,
		`INSERT INTO refresh_settings (site_id, ${columns.join(', ')}) VALUES (?) ON DUPLICATE KEY UPDATE ${columns.map(set).join(', ')}`,
		[
			[
				s.siteId,
				stored.ownApproval,
				stored.mostAtOnce,
				stored.holdOffH,
				stored.scheduleOn,
				stored.scheduleReasons,
				stored.mostANight,
				stored.changedBy,
				stored.changedAtMs
			]
		]
	);
}
