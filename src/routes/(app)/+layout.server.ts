import { instance } from '$lib/server/api/instance';
import { PATHS } from '$lib/server/auth/paths';
import { personIdOf } from '$lib/server/auth/reach';
import { listed } from '$lib/server/store/queries/desk-sites';
import { redirect } from '@sveltejs/kit';
import type { LayoutServerLoad } from './$types';

/** Who is here and which sites they have: every sheet's index and title block need it. */
export const load: LayoutServerLoad = async ({ locals, url, depends }) => {
	depends('desk:reach');
	const { reach } = locals;
	if (reach?.role == null) {
		redirect(303, `${PATHS.signIn}?to=${encodeURIComponent(url.pathname + url.search)}`);
	}
	if (reach.mustChangePassword) redirect(303, PATHS.password);
	const sites = await listed(instance().store.db, reach.sites);
	return {
		person: { id: personIdOf(reach) ?? 0, name: reach.name, role: reach.role },
		sites: sites.map(({ slug, name, timezone, demo }) => ({ slug, name, timezone, demo }))
	};
};
