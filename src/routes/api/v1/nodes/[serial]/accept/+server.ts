import { ROUTES } from '$lib/schemas/v1/route-table';
import { doAct } from '$lib/server/api/acts';
import { problem } from '$lib/server/api/problem';
import { nodeRoute } from '$lib/server/api/route';

export const POST = nodeRoute(ROUTES['POST /nodes/{serial}/accept'], async (ctx) => {
	const { site, node, body, reach, nowMs } = ctx;
	if (node.bayId === null) return problem(422, 'This node is in no bay: place it first.');
	return await doAct(ctx, {
		siteId: site.id,
		nodeId: node.id,
		bayId: node.bayId,
		kind: 'accept',
		args: { seenEmpty: body.seenEmpty },
		atMs: nowMs,
		byActor: reach.actor
	});
});
