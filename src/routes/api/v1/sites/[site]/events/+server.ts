import { ROUTES } from '$lib/schemas/v1/route-table';
import { listEvents } from '$lib/server/api/feed';
import { siteRoute } from '$lib/server/api/route';

export const GET = siteRoute(
	ROUTES['GET /sites/{site}/events'],
	async ({ app, site, reach, query, nowMs }) => {
		const { after, from, to, bay, limit, cursor } = query;
		const effective = query.effective ?? false;
		const personal = reach.personalAllowed;
		const filter = { site, personal, nowMs, after, from, to, bay, effective };
		return await listEvents(app, { ...filter, limit, cursor });
	}
);
