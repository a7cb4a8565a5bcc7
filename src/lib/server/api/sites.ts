import type { Counts, SiteIn, SitePatch } from '$lib/schemas/v1/sites';
import * as bays from '$lib/server/store/queries/bays';
import * as changes from '$lib/server/store/queries/changes';
import * as sites from '$lib/server/store/queries/sites';
import { snapshot } from '$lib/server/store/transaction';
import type { Reach } from '$lib/server/auth/reach';
import { ok, type Answer } from './answer';
import { badCursor } from './bays';
import { decodeCursor, encodeCursor, idCursor } from './cursor';
import type { Instance } from './instance';
import type { Problem } from './problem';

export const siteView = (row: sites.SiteRow) => ({
	slug: row.slug,
	name: row.name,
	lat: row.latDeg,
	lon: row.lonDeg,
	altitudeM: row.altitudeM,
	timezone: row.timezone,
	demo: row.demo
});

export function siteValues(given: SiteIn): sites.SiteValues & { slug: string };
export function siteValues(given: SitePatch): Partial<sites.SiteValues>;
export function siteValues(given: SitePatch | SiteIn): Partial<sites.SiteValues> {
	const { lat, lon, ...rest } = given;
	return {
		...rest,
		...(lat === undefined ? {} : { latDeg: lat }),
		...(lon === undefined ? {} : { lonDeg: lon })
	} as Partial<sites.SiteValues>;
}

export async function listSites(
	app: Instance,
	reach: Reach,
	q: { limit: number; cursor: string | undefined }
): Promise<Answer | Problem> {
	const at = q.cursor === undefined ? { after: 0 } : decodeCursor(idCursor, q.cursor);
	if (at === null) return badCursor();
	const rows = await sites.page(app.store.db, reach.sites, at.after, q.limit + 1);
	const shown = rows.slice(0, q.limit);
	const last = shown.at(-1);
	const more = rows.length > q.limit && last !== undefined;
	return ok({ items: shown.map(siteView), next: more ? encodeCursor({ after: last.id }) : null });
}

/** Totals of fewer than five bays that include a personal one are not shown. */
const FEW = 5;

type Sum = Counts & { personal: number };
const NOTHING: Sum = {
	bays: 0,
	personal: 0,
	occupied: 0,
	vacant: 0,
	unknown: 0,
	closed: 0,
	doubtful: 0
};

const add = (a: Sum, b: Sum): Sum => ({
	bays: a.bays + b.bays,
	personal: a.personal + b.personal,
	occupied: a.occupied + b.occupied,
	vacant: a.vacant + b.vacant,
	unknown: a.unknown + b.unknown,
	closed: a.closed + b.closed,
	doubtful: a.doubtful + b.doubtful
});

export function countsShown({ personal, ...counts }: Sum): Counts | null {
	return personal > 0 && counts.bays < FEW ? null : counts;
}

function sumOf(row: bays.CountRow): Sum {
	const { bays: n, personal, occupied, vacant, unknown, closed, doubtful } = row;
	return { bays: n, personal, occupied, vacant, unknown, closed, doubtful };
}

export async function siteDetail(
	app: Instance,
	site: sites.SiteRow,
	personal: boolean,
	nowMs: number
): Promise<Answer> {
	return await snapshot(app.store, async (tx) => {
		const changeId = await changes.cursor(tx.sql, site.id);
		const rows = await bays.counts(tx.sql, site.id, personal, nowMs);
		const sums = rows.map(sumOf);
		return ok(
			{
				...siteView(site),
				counts: countsShown(sums.reduce(add, NOTHING)),
				zones: rows.map((row) => ({
					code: row.zoneCode,
					name: row.zoneName,
					counts: countsShown(sumOf(row))
				}))
			},
			{ changeId }
		);
	});
}
