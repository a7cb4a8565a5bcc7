import type { SiteSettings, StoredSettings } from '$lib/server/store/queries/refresh-settings';

/** Why a film refresh may be due (method 6), as the schedule may take them up. */
export const DUE_REASONS = ['inverted', 'strong_field', 'unexplained'] as const;
export type DueReason = (typeof DUE_REASONS)[number];

export const DUE_WORDS: Readonly<Record<DueReason, string>> = {
	inverted: 'the film is flipped',
	strong_field: 'a strong field met the film, no pulse since',
	unexplained: 'unexplained drift, no pulse since it began'
};

export interface RefreshSettings {
	ownApproval: boolean;
	mostAtOnce: number;
	holdOffH: number;
	scheduleOn: boolean;
	scheduleReasons: DueReason[];
	mostANight: number;
	quietFromMin: number;
	quietToMin: number;
	pairRule: SiteSettings['pairRule'];
	timezone: string;
}

/** The schedule is off until a person turns it on; nobody approves their own request. */
export const DEFAULTS = {
	ownApproval: false,
	mostAtOnce: 3,
	holdOffH: 12,
	scheduleOn: false,
	mostANight: 5
} as const;

const isReason = (text: string): text is DueReason =>
	(DUE_REASONS as readonly string[]).includes(text);

export function settingsOf(site: SiteSettings): RefreshSettings {
	const stored: Partial<StoredSettings> = site.stored ?? {};
	const { timezone, quietFromMin, quietToMin, pairRule } = site;
	return {
		...{ timezone, quietFromMin, quietToMin, pairRule },
		ownApproval: stored.ownApproval ?? DEFAULTS.ownApproval,
		mostAtOnce: stored.mostAtOnce ?? DEFAULTS.mostAtOnce,
		holdOffH: stored.holdOffH ?? DEFAULTS.holdOffH,
		scheduleOn: stored.scheduleOn ?? DEFAULTS.scheduleOn,
		scheduleReasons:
			stored.scheduleReasons === undefined
				? [...DUE_REASONS]
				: stored.scheduleReasons.split(',').filter(isReason),
		mostANight: stored.mostANight ?? DEFAULTS.mostANight
	};
}

/** Reasons that hold, from what detection and drift say of a node. */
export function dueReasons(node: {
	conditions: readonly string[];
	unexplainedSinceMs: number | null;
}): DueReason[] {
	const has = (condition: string) => node.conditions.includes(condition);
	const reasons: DueReason[] = [];
	if (has('inverted')) reasons.push('inverted');
	if (has('clipped')) reasons.push('strong_field');
	if (node.unexplainedSinceMs !== null) reasons.push('unexplained');
	// Detection says 'refresh due' of a clipped or too strong field (method 4, 'Magnet').
	if (has('refresh_due') && reasons.length === 0) reasons.push('strong_field');
	return reasons;
}
