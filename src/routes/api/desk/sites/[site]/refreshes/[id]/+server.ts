import { DESK_REFRESH_ROUTES } from '$lib/schemas/desk-refreshes';
import { ok } from '$lib/server/api/answer';
import { isProblem } from '$lib/server/api/problem';
import { siteRoute } from '$lib/server/api/route';
import { find } from '$lib/server/refreshes/api';
import { detailOf } from '$lib/server/refreshes/sheet';

export const GET = siteRoute(DESK_REFRESH_ROUTES.one, async (ctx) => {
	const { app, site, reach, event, nowMs } = ctx;
	const { pool } = app.store;
	const found = await find(pool, reach, event.params['id'], site.id);
	return isProblem(found) ? found : ok(await detailOf(pool, found, nowMs));
});
