import { and, desc, eq, gt, inArray, isNull, or } from 'drizzle-orm';
import { person, site, wallLink, wallLinkSite } from '../schema';
import type { Db } from './people';

export interface NewWallLink {
	tokenHash: Buffer;
	name: string;
	turnS: number;
	siteIds: readonly number[];
	makerId: number | null;
	expiresAtMs: number | null;
}

export async function create(db: Db, link: NewWallLink, nowMs: number): Promise<number> {
	const { siteIds, ...values } = link;
	const [{ insertId }] = await db.insert(wallLink).values({ ...values, createdAtMs: nowMs });
	await db.insert(wallLinkSite).values(siteIds.map((siteId) => ({ linkId: insertId, siteId })));
	return insertId;
}

/** A link that opens, with its living sites by name; null when not known, revoked, over or without a site. */
export async function opening(db: Db, tokenHash: Buffer, nowMs: number) {
	const rows = await db
		.select({ link: wallLink, site })
		.from(wallLink)
		.innerJoin(wallLinkSite, eq(wallLinkSite.linkId, wallLink.id))
		.innerJoin(site, eq(site.id, wallLinkSite.siteId))
		.where(
			and(
				eq(wallLink.tokenHash, tokenHash),
				isNull(wallLink.revokedAtMs),
				or(isNull(wallLink.expiresAtMs), gt(wallLink.expiresAtMs, nowMs)),
				isNull(site.removedAtMs)
			)
		)
		.orderBy(site.name);
	const first = rows[0];
	if (first === undefined) return null;
	return { turnS: first.link.turnS, sites: rows.map((row) => row.site) };
}

/** Links not revoked, the newest first; the token's hash stays here. */
export async function list(db: Db) {
	const links = await db
		.select({
			id: wallLink.id,
			name: wallLink.name,
			turnS: wallLink.turnS,
			maker: person.name,
			createdAtMs: wallLink.createdAtMs,
			expiresAtMs: wallLink.expiresAtMs
		})
		.from(wallLink)
		.leftJoin(person, eq(person.id, wallLink.makerId))
		.where(isNull(wallLink.revokedAtMs))
		.orderBy(desc(wallLink.id));
	if (links.length === 0) return [];
	const sites = await db
		.select()
		.from(wallLinkSite)
		.where(
			inArray(
				wallLinkSite.linkId,
				links.map(({ id }) => id)
			)
		);
	return links.map((link) => ({
		...link,
		siteIds: sites.filter(({ linkId }) => linkId === link.id).map(({ siteId }) => siteId)
	}));
}

/** false when it was revoked before. */
export async function revoke(db: Db, id: number, nowMs: number): Promise<boolean> {
	const [{ affectedRows }] = await db
		.update(wallLink)
		.set({ revokedAtMs: nowMs })
		.where(and(eq(wallLink.id, id), isNull(wallLink.revokedAtMs)));
	return affectedRows === 1;
}
