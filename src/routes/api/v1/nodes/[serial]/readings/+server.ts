import { ROUTES } from '$lib/schemas/v1/route-table';
import { listReadings } from '$lib/server/api/readings';
import { nodeRoute } from '$lib/server/api/route';

export const GET = nodeRoute(
	ROUTES['GET /nodes/{serial}/readings'],
	async ({ app, node, query, nowMs }) => {
		const { from, to, points, limit, cursor } = query;
		const raw = query.raw ?? false;
		return await listReadings(app, node, { from, to, points, raw, limit, cursor }, nowMs);
	}
);
