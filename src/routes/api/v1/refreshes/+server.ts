import { ROUTES } from '$lib/schemas/v1/route-table';
import { route } from '$lib/server/api/route';
import { listRefreshes } from '$lib/server/refreshes/api';

export const GET = route(
	ROUTES['GET /refreshes'],
	async ({ app, reach, query }) => await listRefreshes(app, reach, query)
);
