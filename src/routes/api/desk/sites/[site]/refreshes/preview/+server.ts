import { DESK_REFRESH_ROUTES } from '$lib/schemas/desk-refreshes';
import { ok } from '$lib/server/api/answer';
import { siteRoute } from '$lib/server/api/route';
import { preview } from '$lib/server/refreshes/bulk';

export const POST = siteRoute(DESK_REFRESH_ROUTES.preview, async ({ app, site, reach, body }) =>
	ok(await preview(app.store.pool, site.id, body, reach.personalAllowed))
);
