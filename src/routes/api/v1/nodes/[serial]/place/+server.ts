import { ROUTES } from '$lib/schemas/v1/route-table';
import { answerAct } from '$lib/server/api/acts';
import { accepted } from '$lib/server/api/answer';
import { placeIn } from '$lib/server/api/nodes';
import { isProblem } from '$lib/server/api/problem';
import { nodeRoute } from '$lib/server/api/route';

export const POST = nodeRoute(ROUTES['POST /nodes/{serial}/place'], async (ctx) => {
	const { app, site, node, body, reach, nowMs } = ctx;
	let actId = 0;
	const written = await ctx.write(async (tx) => {
		const by = { app, siteId: site.id, actor: reach.actor, nowMs };
		const placed = await placeIn(tx, by, node.id, body.bay, node.preCommissioned);
		if (isProblem(placed)) return placed;
		actId = placed;
		return accepted({ act: actId, outcome: null });
	});
	return isProblem(written) ? written : await answerAct(app, actId);
});
