import { DESK_REFRESH_ROUTES } from '$lib/schemas/desk-refreshes';
import { ok } from '$lib/server/api/answer';
import { siteRoute } from '$lib/server/api/route';
import { sheetOf } from '$lib/server/refreshes/sheet';

export const GET = siteRoute(DESK_REFRESH_ROUTES.sheet, async ({ app, site, reach, nowMs }) => {
	const reader = { personal: reach.personalAllowed, actor: reach.actor };
	return ok(await sheetOf(app.store.pool, site, reader, nowMs));
});
