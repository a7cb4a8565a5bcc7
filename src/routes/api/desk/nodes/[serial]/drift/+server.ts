import { DESK_ROUTES } from '$lib/schemas/desk';
import { ok } from '$lib/server/api/answer';
import { nodeRoute } from '$lib/server/api/route';
import { nodeDriftView } from '$lib/server/drift/node-view';

export const GET = nodeRoute(DESK_ROUTES.nodeDrift, async ({ app, node, site, query, nowMs }) =>
	ok(await nodeDriftView(app.store.pool, site?.slug ?? '', { node, hours: query.hours, nowMs }))
);
