import { and, asc, eq, inArray, isNull, like, or } from 'drizzle-orm';
import { bay, node, site } from '../schema';
import type { Within } from './desk-sites';
import type { Db } from './people';

/** `%` and `_` are letters here, not wild cards. */
const literal = (text: string) => text.replace(/[\\%_]/g, (c) => `\\${c}`);

/** Bays whose code or node's serial holds the text; those that begin with it first. */
export async function find(db: Db, sites: Within, text: string, limit: number) {
	const part = `%${literal(text)}%`;
	const rows = await db
		.select({
			bay: bay.code,
			serial: node.serial,
			site: site.slug,
			siteName: site.name
		})
		.from(bay)
		.innerJoin(site, eq(site.id, bay.siteId))
		.leftJoin(node, and(eq(node.bayId, bay.id), isNull(node.withdrawnAtMs)))
		.where(
			and(
				isNull(site.removedAtMs),
				eq(bay.removedAtMs, 0),
				sites === 'all' ? undefined : inArray(site.id, [-1, ...sites]),
				or(like(bay.code, part), like(node.serial, part))
			)
		)
		.orderBy(asc(bay.code))
		.limit(limit * 4);
	const wanted = text.toLowerCase();
	const rank = (row: (typeof rows)[number]) =>
		row.bay.toLowerCase() === wanted ? 0 : row.bay.toLowerCase().startsWith(wanted) ? 1 : 2;
	return rows.sort((a, b) => rank(a) - rank(b)).slice(0, limit);
}
