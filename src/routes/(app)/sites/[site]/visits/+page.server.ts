import { VISIT_READERS } from '$lib/schemas/visits';
import { instance } from '$lib/server/api/instance';
import { requirePage } from '$lib/server/auth/require-page';
import { siteVisits } from '$lib/server/visits/sheet';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals, params }) => {
	const { reach, site } = await requirePage(locals, { roles: VISIT_READERS, site: params.site });
	const nowMs = Date.now();
	return { visits: await siteVisits(instance().store, site, reach, nowMs), asOfMs: nowMs };
};
