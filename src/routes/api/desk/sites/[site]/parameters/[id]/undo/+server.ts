import { DESK_ROUTES } from '$lib/schemas/desk';
import { answerAct } from '$lib/server/api/acts';
import { accepted } from '$lib/server/api/answer';
import { undoParameter } from '$lib/server/api/parameters';
import { isProblem } from '$lib/server/api/problem';
import { siteRoute } from '$lib/server/api/route';
import { byId } from '$lib/server/store/queries/nodes';
import { byId as parameterById } from '$lib/server/store/queries/parameters';

export const POST = siteRoute(DESK_ROUTES.undoParameter, async (ctx) => {
	const { app, site, reach, nowMs, event } = ctx;
	const id = Number(event.params['id']);
	let actId = 0;
	const written = await ctx.write(async (tx) => {
		const row = Number.isSafeInteger(id) ? await parameterById(tx.db, site.id, id) : null;
		const node = row?.nodeId == null ? null : await byId(tx.db, row.nodeId);
		const by = { siteId: site.id, node, actor: reach.actor, nowMs };
		const act = await undoParameter(tx, by, id);
		if (isProblem(act)) return act;
		actId = act;
		return accepted({ act, outcome: null });
	});
	return isProblem(written) ? written : await answerAct(app, actId);
});
