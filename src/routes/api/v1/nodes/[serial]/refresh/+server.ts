import { ROUTES } from '$lib/schemas/v1/route-table';
import { nodeRoute } from '$lib/server/api/route';
import { askOne } from '$lib/server/refreshes/api';

export const POST = nodeRoute(ROUTES['POST /nodes/{serial}/refresh'], async (ctx) => {
	const { site, node, reach, body, nowMs } = ctx;
	const reason = body.reason ?? 'asked for without a reason';
	return await ctx.write(
		async (tx) => await askOne(tx, { siteId: site.id, nodeId: node.id, reach, reason }, nowMs)
	);
});
