import { and, asc, eq, inArray, isNull, type SQL } from 'drizzle-orm';
import { bay, bayState, node, site, zone } from '../schema';
import type { Db } from './people';

/** 'all' or the ids of the sites within a person's reach. */
export type Within = 'all' | ReadonlySet<number>;

const within = (sites: Within): SQL | undefined =>
	sites === 'all'
		? isNull(site.removedAtMs)
		: and(isNull(site.removedAtMs), inArray(site.id, [-1, ...sites]));

/** Sites within reach, by name: what the sheet index and the title block need. */
export async function listed(db: Db, sites: Within) {
	return await db
		.select({
			id: site.id,
			slug: site.slug,
			name: site.name,
			timezone: site.timezone,
			demo: site.demo
		})
		.from(site)
		.where(within(sites))
		.orderBy(asc(site.name));
}
export type ListedSite = Awaited<ReturnType<typeof listed>>[number];

/** Zones and outlines of the living bays of a site; outlines as GeoJSON text. */
export async function outlines(db: Db, siteId: number) {
	const [zones, bays] = await Promise.all([
		db.select({ code: zone.code, name: zone.name }).from(zone).where(eq(zone.siteId, siteId)),
		db
			.select({ code: bay.code, zone: zone.code, geometry: bay.geometry, personal: bay.personal })
			.from(bay)
			.innerJoin(zone, eq(zone.id, bay.zoneId))
			.where(and(eq(bay.siteId, siteId), eq(bay.removedAtMs, 0)))
			.orderBy(asc(zone.code), asc(bay.code))
	]);
	return { zones, bays };
}

/** What the register counts, one row a living bay of the sites named. */
export async function registerRows(db: Db, siteIds: readonly number[]) {
	if (siteIds.length === 0) return [];
	return await db
		.select({
			siteId: bay.siteId,
			state: bayState.state,
			doubt: bayState.doubtReason,
			condition: bayState.condition,
			also: bayState.also
		})
		.from(bay)
		.leftJoin(bayState, eq(bayState.bayId, bay.id))
		.where(and(inArray(bay.siteId, [...siteIds]), eq(bay.removedAtMs, 0)));
}

/** Serials with their bay and site, for Find. */
export async function placedNodes(db: Db, siteIds: readonly number[]) {
	if (siteIds.length === 0) return [];
	return await db
		.select({ serial: node.serial, bayId: node.bayId, siteId: node.siteId })
		.from(node)
		.where(inArray(node.siteId, [...siteIds]));
}
