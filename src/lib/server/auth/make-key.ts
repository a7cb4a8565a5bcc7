import { isScope, type Scope } from '$lib/schemas/roles';
import type { Database } from '$lib/server/store/connect';
import * as keys from '$lib/server/store/queries/keys';
import { hashSecret, keyText, newKeyParts } from './api-key';

export interface KeyWanted {
	name: string;
	scopes: readonly string[];
	/** Slugs; 'all' for every site, those to come included. */
	sites: 'all' | readonly string[];
	origins?: readonly string[];
	personalAllowed?: boolean;
	/** null when made on the command line. */
	makerId?: number | null;
	expiresAtMs?: number | null;
}

export type KeyMade =
	| { ok: true; id: number; publicId: string; /** Shown this once. */ key: string }
	| { ok: false; reason: string };

function checkOrigins(origins: readonly string[]): string | null {
	const bad = origins.find((o) => !URL.canParse(o) || new URL(o).origin !== o);
	return bad === undefined
		? null
		: `'${bad}' is not an origin: scheme, host and port only, for instance https://map.example`;
}

/** Makes a key and stores only the hash of its secret. Runs outside Kit too (`npm run key`). */
export async function makeKey(
	db: Database,
	wanted: KeyWanted,
	nowMs = Date.now()
): Promise<KeyMade> {
	const name = wanted.name.trim();
	if (name === '' || name.length > 120) return refuse('a key needs a name of 1 to 120 characters');
	const unknown = wanted.scopes.find((scope) => !isScope(scope));
	if (unknown !== undefined) return refuse(`there is no scope '${unknown}'`);
	if (wanted.scopes.length === 0) return refuse('a key needs at least one scope');
	const badOrigin = checkOrigins(wanted.origins ?? []);
	if (badOrigin !== null) return refuse(badOrigin);
	return await db.transaction(async (tx) => {
		const sites = await siteIds(tx, wanted.sites);
		if (!sites.ok) return refuse(`there is no site '${sites.missing}'`);
		const parts = newKeyParts();
		const id = await keys.create(
			tx,
			{
				publicId: parts.publicId,
				secretHash: hashSecret(parts.secret),
				name,
				scopes: [...new Set(wanted.scopes as Scope[])],
				sites: sites.ids,
				origins: wanted.origins ?? [],
				personalAllowed: wanted.personalAllowed ?? false,
				makerId: wanted.makerId ?? null,
				expiresAtMs: wanted.expiresAtMs ?? null
			},
			nowMs
		);
		return { ok: true, id, publicId: parts.publicId, key: keyText(parts) } as const;
	});
}

const refuse = (reason: string) => ({ ok: false, reason }) as const;

async function siteIds(
	tx: Parameters<typeof keys.siteIdsBySlug>[0],
	sites: KeyWanted['sites']
): Promise<{ ok: true; ids: 'all' | number[] } | { ok: false; missing: string }> {
	if (sites === 'all') return { ok: true, ids: 'all' };
	const found = await keys.siteIdsBySlug(tx, sites);
	const missing = sites.find((slug) => !found.has(slug));
	if (missing !== undefined) return { ok: false, missing };
	return { ok: true, ids: [...new Set(found.values())] };
}
