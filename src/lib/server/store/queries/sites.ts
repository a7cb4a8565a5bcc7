import { and, asc, eq, gt, inArray, isNull } from 'drizzle-orm';
import { site, zone } from '../schema';
import type { Db } from './people';

export type SiteRow = typeof site.$inferSelect;

/** A living site. */
export async function bySlug(db: Db, slug: string): Promise<SiteRow | null> {
	const rows = await db
		.select()
		.from(site)
		.where(and(eq(site.slug, slug), isNull(site.removedAtMs)));
	return rows[0] ?? null;
}

export async function byId(db: Db, id: number): Promise<SiteRow | null> {
	const rows = await db
		.select()
		.from(site)
		.where(and(eq(site.id, id), isNull(site.removedAtMs)));
	return rows[0] ?? null;
}

/** Living sites within reach, by id, after a cursor. */
export async function page(
	db: Db,
	sites: 'all' | ReadonlySet<number>,
	afterId: number,
	limit: number
): Promise<SiteRow[]> {
	if (sites !== 'all' && sites.size === 0) return [];
	return await db
		.select()
		.from(site)
		.where(
			and(
				isNull(site.removedAtMs),
				gt(site.id, afterId),
				sites === 'all' ? undefined : inArray(site.id, [...sites])
			)
		)
		.orderBy(asc(site.id))
		.limit(limit);
}

export interface SiteValues {
	name: string;
	latDeg: number;
	lonDeg: number;
	altitudeM: number;
	timezone: string;
}

/** false when the slug is taken (a removed site keeps its own under another name). */
export async function create(
	db: Db,
	values: SiteValues & { slug: string },
	nowMs: number
): Promise<number> {
	const [{ insertId }] = await db.insert(site).values({ ...values, createdAtMs: nowMs });
	return insertId;
}

export async function patch(db: Db, id: number, values: Partial<SiteValues>): Promise<void> {
	if (Object.keys(values).length > 0) await db.update(site).set(values).where(eq(site.id, id));
}

/** Its rows stay; the slug becomes free for another site. */
export async function remove(db: Db, id: number, nowMs: number): Promise<void> {
	await db
		.update(site)
		.set({ removedAtMs: nowMs, slug: `.removed-${id}` })
		.where(eq(site.id, id));
}

export async function zones(db: Db, siteId: number) {
	return await db.select().from(zone).where(eq(zone.siteId, siteId)).orderBy(asc(zone.code));
}

/** The zone's id; made when it is not there yet. */
export async function ensureZone(db: Db, siteId: number, code: string): Promise<number> {
	const found = await db
		.select({ id: zone.id })
		.from(zone)
		.where(and(eq(zone.siteId, siteId), eq(zone.code, code)));
	if (found[0] !== undefined) return found[0].id;
	const [{ insertId }] = await db.insert(zone).values({ siteId, code, name: code });
	return insertId;
}

/** Slugs of living sites among these. */
export async function slugsOf(db: Db, ids: ReadonlySet<number>): Promise<string[]> {
	if (ids.size === 0) return [];
	const rows = await db
		.select({ slug: site.slug })
		.from(site)
		.where(and(inArray(site.id, [...ids]), isNull(site.removedAtMs)))
		.orderBy(asc(site.slug));
	return rows.map((row) => row.slug);
}
