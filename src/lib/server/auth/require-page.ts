import { errorWords } from '$lib/format/messages/error';
import { error } from '@sveltejs/kit';
import type { Role } from '$lib/schemas/roles';
import { instance } from '$lib/server/api/instance';
import * as sites from '$lib/server/store/queries/sites';
import { reaches, type Reach } from './reach';

interface PageRule {
	/** Left out: every role. */
	roles?: readonly Role[];
}

export interface PageReach {
	reach: Reach & { role: Role };
	site: sites.SiteRow | null;
}

/**
 * For loads and actions of pages behind sign-in (hooks.server.ts has sent everybody else to sign in):
 * 403 for a role that the page is not for, 404 for a site that is not there or out of reach.
 */
export async function requirePage(
	locals: App.Locals,
	rule: PageRule & { site: string }
): Promise<PageReach & { site: sites.SiteRow }>;
export async function requirePage(locals: App.Locals, rule?: PageRule): Promise<PageReach>;
export async function requirePage(
	locals: App.Locals,
	rule: PageRule & { site?: string } = {}
): Promise<PageReach> {
	const { reach } = locals;
	if (reach?.role == null) error(401, errorWords().signIn);
	if (reach.mustChangePassword) error(403, errorWords().password);
	if (rule.roles !== undefined && !rule.roles.includes(reach.role)) {
		error(403, errorWords().role);
	}
	const known = { ...reach, role: reach.role };
	if (rule.site === undefined) return { reach: known, site: null };
	const site = await sites.bySlug(instance().store.db, rule.site);
	if (site === null || !reaches(reach, site.id)) error(404, errorWords().noSite);
	return { reach: known, site };
}
