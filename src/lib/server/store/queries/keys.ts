import { and, eq, inArray, isNull } from 'drizzle-orm';
import { apiKey, apiKeySite, person, site } from '../schema';
import type { Db } from './people';

export interface NewKey {
	publicId: string;
	secretHash: Buffer;
	name: string;
	scopes: readonly string[];
	sites: 'all' | readonly number[];
	origins: readonly string[];
	personalAllowed: boolean;
	makerId: number | null;
	expiresAtMs: number | null;
}

export async function create(db: Db, key: NewKey, nowMs: number): Promise<number> {
	const { scopes, sites, origins, ...rest } = key;
	const [{ insertId }] = await db.insert(apiKey).values({
		...rest,
		scopes: scopes.join(' '),
		allSites: sites === 'all',
		origins: origins.length === 0 ? null : origins.join(' '),
		createdAtMs: nowMs
	});
	if (sites !== 'all' && sites.length > 0) {
		await db.insert(apiKeySite).values(sites.map((siteId) => ({ keyId: insertId, siteId })));
	}
	return insertId;
}

export async function revoke(db: Db, id: number, nowMs: number): Promise<boolean> {
	const [{ affectedRows }] = await db
		.update(apiKey)
		.set({ revokedAtMs: nowMs })
		.where(and(eq(apiKey.id, id), isNull(apiKey.revokedAtMs)));
	return affectedRows > 0;
}

/** For the connections sheet; the secret's hash stays here. */
export async function list(db: Db) {
	const keys = await db
		.select({
			id: apiKey.id,
			publicId: apiKey.publicId,
			name: apiKey.name,
			scopes: apiKey.scopes,
			allSites: apiKey.allSites,
			origins: apiKey.origins,
			personalAllowed: apiKey.personalAllowed,
			makerId: apiKey.makerId,
			maker: person.name,
			makerSwitchedOffAtMs: person.switchedOffAtMs,
			createdAtMs: apiKey.createdAtMs,
			expiresAtMs: apiKey.expiresAtMs,
			revokedAtMs: apiKey.revokedAtMs
		})
		.from(apiKey)
		.leftJoin(person, eq(person.id, apiKey.makerId))
		.orderBy(apiKey.id);
	const sites = await db.select().from(apiKeySite);
	return keys.map((k) => ({
		...k,
		siteIds: sites.filter((s) => s.keyId === k.id).map((s) => s.siteId)
	}));
}

/** Ids of living sites by slug; a slug that is not there is missing in the answer. */
export async function siteIdsBySlug(
	db: Db,
	slugs: readonly string[]
): Promise<Map<string, number>> {
	if (slugs.length === 0) return new Map();
	const rows = await db
		.select({ id: site.id, slug: site.slug })
		.from(site)
		.where(and(inArray(site.slug, [...slugs]), isNull(site.removedAtMs)));
	return new Map(rows.map((row) => [row.slug, row.id]));
}
