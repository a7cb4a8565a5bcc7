import { ROUTES } from '$lib/schemas/v1/route-table';
import { siteRoute } from '$lib/server/api/route';
import { listStays } from '$lib/server/api/stays';

export const GET = siteRoute(
	ROUTES['GET /sites/{site}/stays'],
	async ({ app, site, reach, query, nowMs }) => {
		const { bay, from, to, limit, cursor } = query;
		const personal = reach.personalAllowed;
		return await listStays(app, { site, personal, nowMs, bay, from, to, limit, cursor });
	}
);
