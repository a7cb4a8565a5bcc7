import { ROUTES } from '$lib/schemas/v1/route-table';
import { ok } from '$lib/server/api/answer';
import { liveView, siteLive } from '$lib/server/api/live';
import { siteRoute } from '$lib/server/api/route';

export const GET = siteRoute(ROUTES['GET /sites/{site}/live'], async ({ app, site, nowMs }) =>
	ok(liveView(await siteLive(app, site, nowMs)))
);
