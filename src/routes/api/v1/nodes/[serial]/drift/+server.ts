import { ROUTES } from '$lib/schemas/v1/route-table';
import { ok } from '$lib/server/api/answer';
import { nodeRoute } from '$lib/server/api/route';
import { driftAnswer } from '$lib/server/drift/node-view';

export const GET = nodeRoute(
	ROUTES['GET /nodes/{serial}/drift'],
	async ({ app, node, query, nowMs }) =>
		ok(await driftAnswer(app.store.pool, { node, hours: query.hours, nowMs }))
);
