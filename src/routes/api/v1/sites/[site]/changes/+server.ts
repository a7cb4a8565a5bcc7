import { ROUTES } from '$lib/schemas/v1/route-table';
import { listChanges } from '$lib/server/api/feed';
import { siteRoute } from '$lib/server/api/route';

export const GET = siteRoute(
	ROUTES['GET /sites/{site}/changes'],
	async ({ app, site, reach, query }) => {
		const { after, limit, cursor } = query;
		return await listChanges(app, { site, personal: reach.personalAllowed, after, limit, cursor });
	}
);
