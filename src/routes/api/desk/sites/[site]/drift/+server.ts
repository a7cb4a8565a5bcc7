import { DESK_ROUTES } from '$lib/schemas/desk';
import { ok } from '$lib/server/api/answer';
import { siteRoute } from '$lib/server/api/route';
import { driftBoard } from '$lib/server/drift/board-view';

export const GET = siteRoute(DESK_ROUTES.driftBoard, async ({ app, site, query, nowMs }) =>
	ok(await driftBoard(app.store.pool, site, query.lineHours, nowMs))
);
