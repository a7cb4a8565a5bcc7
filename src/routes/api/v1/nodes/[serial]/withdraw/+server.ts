import { ROUTES } from '$lib/schemas/v1/route-table';
import { doAct } from '$lib/server/api/acts';
import { problem } from '$lib/server/api/problem';
import { nodeRoute } from '$lib/server/api/route';

export const POST = nodeRoute(ROUTES['POST /nodes/{serial}/withdraw'], async (ctx) => {
	const { site, node, body, reach, nowMs } = ctx;
	if (node.withdrawnAtMs !== null) return problem(409, 'This node is withdrawn already.');
	return await doAct(ctx, {
		siteId: site.id,
		nodeId: node.id,
		bayId: node.bayId,
		kind: 'withdraw',
		args: {},
		atMs: nowMs,
		byActor: reach.actor,
		why: body.reason ?? null
	});
});
