import {
	defaultSettings,
	mailSettings,
	type MailSettings,
	type NoticeKind
} from '$lib/schemas/notices';
import type { Mailable } from '$lib/server/store/queries/mail-people';
import { dueMs } from './due';

/** A person with the settings that hold: their own, else their role's. */
export interface Recipient {
	id: number;
	email: string;
	name: string;
	initials: string;
	role: Mailable['role'];
	demo: boolean;
	language: string;
	/** null: the site's. */
	timezone: string | null;
	sites: 'all' | ReadonlySet<number>;
	settings: MailSettings;
}

const idsOf = (text: string | null): number[] =>
	(text ?? '')
		.split(',')
		.filter((part) => part !== '')
		.map(Number);

/** What cannot be read (a row of an older or newer version) gives the role's defaults, never silence. */
export function settingsOf(row: Mailable): MailSettings {
	const plain = defaultSettings(row.role);
	if (row.paces === null) return plain;
	const parsed = mailSettings.safeParse({
		paces: { ...plain.paces, ...safeJson(row.paces) },
		sites: row.sites === null ? null : idsOf(row.sites),
		quietFromMin: row.quietFromMin,
		quietToMin: row.quietToMin,
		quietWeekends: row.quietWeekends === 1,
		dailyAtMin: row.dailyAtMin,
		deputyId: row.deputyId,
		off: row.offAtMs !== null
	});
	return parsed.success ? parsed.data : plain;
}

function safeJson(text: string): object {
	try {
		const value: unknown = JSON.parse(text);
		return typeof value === 'object' && value !== null ? value : {};
	} catch {
		return {};
	}
}

export const recipientOf = (row: Mailable): Recipient => ({
	...{ id: row.id, email: row.email, name: row.name, initials: row.initials, role: row.role },
	...{ language: row.language, timezone: row.timezone, demo: row.demo === 1 },
	sites: row.allSites === 1 ? 'all' : new Set(idsOf(row.siteIds)),
	settings: settingsOf(row)
});

/** Within reach and, unless urged, among the sites they want mail of. The installation's own is the admins'. */
export function concerns(person: Recipient, siteId: number | null, urged = false): boolean {
	if (siteId === null) return person.role === 'admin';
	if (person.sites !== 'all' && !person.sites.has(siteId)) return false;
	return urged || person.settings.sites === null || person.settings.sites.includes(siteId);
}

/** Who holds a notice of a site may do something about it. */
export const mayHold = (person: Recipient, siteId: number | null): boolean =>
	person.role !== 'integrator' && concerns(person, siteId, true);

/** When each is mailed of a notice of this kind; who is not mailed is left out. */
export function toBeTold(
	people: readonly Recipient[],
	kind: NoticeKind,
	site: { id: number | null; zone: string },
	o: { nowMs: number; urged?: boolean }
): { person: Recipient; dueMs: number }[] {
	const urged = o.urged ?? false;
	return people.flatMap((person) => {
		if (!concerns(person, site.id, urged)) return [];
		const zone = person.timezone ?? site.zone;
		const atMs = dueMs(person.settings, kind, { nowMs: o.nowMs, zone, urged });
		return atMs === null ? [] : [{ person, dueMs: atMs }];
	});
}
