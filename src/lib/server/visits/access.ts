import type { Role } from '$lib/schemas/roles';
import type { AccessView, PermitView } from '$lib/schemas/visit-view';
import type { Sql } from '$lib/server/store/queries/bulk';
import * as access from '$lib/server/store/queries/site-access';

const DAY_MS = 86_400_000;

/** Today at the site, 'YYYY-MM-DD'. */
export function localDay(nowMs: number, timezone: string): string {
	const parts = Object.fromEntries(
		new Intl.DateTimeFormat('en-GB', {
			timeZone: timezone,
			...{ year: 'numeric', month: '2-digit', day: '2-digit' }
		})
			.formatToParts(nowMs)
			.map(({ type, value }) => [type, value])
	);
	return `${parts['year']}-${parts['month']}-${parts['day']}`;
}

/** Calendar days from one day to another; negative when it lies before. */
export const daysBetween = (from: string, to: string): number =>
	Math.round((Date.parse(`${to}T00:00:00Z`) - Date.parse(`${from}T00:00:00Z`)) / DAY_MS);

const permitView = (permit: access.PermitRow, today: string): PermitView => ({
	...permit,
	daysLeft: permit.lastDay === null ? null : daysBetween(today, permit.lastDay)
});

/** How to get in, as this role may know it: keys and contact are for those who go there. */
export async function accessView(
	sql: Sql,
	site: { id: number; timezone: string },
	role: Role,
	nowMs: number
): Promise<AccessView> {
	const { access: row, permits } = await access.ofSite(sql, site.id);
	const goes = role === 'maintenance' || role === 'admin';
	const today = localDay(nowMs, site.timezone);
	return {
		parking: row?.parking ?? '',
		wayIn: row?.wayIn ?? '',
		keysAt: goes ? (row?.keysAt ?? '') : null,
		contact: goes ? (row?.contact ?? '') : null,
		permits: permits.map((permit) => permitView(permit, today)),
		version: row?.version ?? 0,
		changedAtMs: row?.changedAtMs ?? null
	};
}
