import { DESK_ROUTES } from '$lib/schemas/desk';
import { ok } from '$lib/server/api/answer';
import { earthCheckOf } from '$lib/server/api/earth';
import { nodeRoute } from '$lib/server/api/route';

export const GET = nodeRoute(DESK_ROUTES.earth, async ({ app, site, node, nowMs }) =>
	ok(await earthCheckOf(app.store.db, site, node.id, nowMs))
);
