import type { RequestView, SiteVisits, WalkLine } from '$lib/schemas/visit-view';
import { personIdOf, reaches } from '$lib/server/auth/reach';
import type { Store } from '$lib/server/store/connect';
import { listed } from '$lib/server/store/queries/desk-sites';
import { list as listPeople } from '$lib/server/store/queries/people';
import type { SiteRow } from '$lib/server/store/queries/sites';
import * as requests from '$lib/server/store/queries/visit-requests';
import * as visits from '$lib/server/store/queries/visits';
import { accessView } from './access';
import { namesOf } from './names';
import { causeViews, type Asker } from './walk-view';

/** Walks of the last time that a sheet lists. */
const ENDED = 20;

type SiteHead = Pick<SiteRow, 'id' | 'slug' | 'name' | 'timezone' | 'demo'>;

/** What needs a visit at a site, the walks under way and the last ones, and how to get in. */
export async function siteVisits(
	store: Store,
	site: SiteHead,
	reach: Asker,
	nowMs: number
): Promise<SiteVisits> {
	const sql = store.pool;
	const people = new Map((await listPeople(store.db)).map(({ id, name }) => [id, name]));
	const named = namesOf(reach, people, nowMs);
	const me = personIdOf(reach);
	const line = (walk: visits.WalkCount): WalkLine => ({
		...{ id: walk.id, takenAtMs: walk.takenAtMs, endedAtMs: walk.endedAtMs },
		by: walk.endedAtMs === null ? walk.takerName : named(walk.takenBy, walk.endedAtMs),
		mine: walk.takenBy !== null && walk.takenBy === me,
		...{ stops: Number(walk.stops), done: Number(walk.done) }
	});
	return {
		site: { slug: site.slug, name: site.name, timezone: site.timezone, demo: site.demo },
		requests: await requestViews(store, [site.id], me),
		open: (await visits.open(sql, [site.id])).map(line),
		ended: (await visits.ended(sql, site.id, ENDED)).map(line),
		access: await accessView(sql, site, reach.role, nowMs)
	};
}

/** Every site in reach that needs somebody or is being walked, in the order of their names. */
export async function visitRegister(
	store: Store,
	reach: Asker,
	nowMs: number
): Promise<SiteVisits[]> {
	const sites = (await listed(store.db, reach.sites)).filter(({ id }) => reaches(reach, id));
	const all: SiteVisits[] = [];
	for (const site of sites) all.push(await siteVisits(store, site, reach, nowMs));
	return all
		.filter(({ requests: asked, open }) => asked.length > 0 || open.length > 0)
		.sort((a, b) => a.site.name.localeCompare(b.site.name));
}

async function requestViews(
	store: Store,
	siteIds: readonly number[],
	me: number | null
): Promise<RequestView[]> {
	const rows = await requests.open(store.pool, siteIds);
	const causes = await requests.causesOf(
		store.pool,
		rows.map(({ id }) => id)
	);
	return rows.map((row) => ({
		...{ id: row.id, bay: row.bay, zone: row.zone, serial: row.serial },
		askedAtMs: row.askedAtMs,
		causes: causeViews(row, causes),
		taker:
			row.takenBy === null
				? null
				: {
						...{ name: row.takerName ?? '', initials: row.takerInitials ?? '' },
						...{ mine: row.takenBy === me, visit: row.visitId }
					}
	}));
}
