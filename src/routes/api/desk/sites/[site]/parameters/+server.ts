import { DESK_ROUTES } from '$lib/schemas/desk';
import { answerAct } from '$lib/server/api/acts';
import { accepted, ok } from '$lib/server/api/answer';
import { parameterSheet, setParameter } from '$lib/server/api/parameters';
import { isProblem, problem } from '$lib/server/api/problem';
import type { Instance } from '$lib/server/api/instance';
import { siteRoute } from '$lib/server/api/route';
import type { SiteRow } from '$lib/server/store/queries/sites';
import { bySerial } from '$lib/server/store/queries/nodes';

/** The node that is named, if it is of this site; null for the site itself. */
async function nodeOf({ app, site }: { app: Instance; site: SiteRow }, serial: string | undefined) {
	if (serial === undefined) return null;
	const node = await bySerial(app.store.db, serial);
	return node?.siteId === site.id ? node : problem(404, `There is no node ${serial} here.`);
}

export const GET = siteRoute(DESK_ROUTES.parameters, async (ctx) => {
	const node = await nodeOf(ctx, ctx.query.node);
	if (isProblem(node)) return node;
	return ok(await parameterSheet(ctx.app, ctx.reach, ctx.site.id, node, ctx.nowMs));
});

export const POST = siteRoute(DESK_ROUTES.setParameter, async (ctx) => {
	const { app, site, reach, body, nowMs } = ctx;
	const node = await nodeOf(ctx, body.node);
	if (isProblem(node)) return node;
	let actId = 0;
	const written = await ctx.write(async (tx) => {
		const by = { siteId: site.id, node, actor: reach.actor, nowMs };
		const act = await setParameter(tx, by, body);
		if (isProblem(act)) return act;
		actId = act;
		return accepted({ act, outcome: null });
	});
	return isProblem(written) ? written : await answerAct(app, actId);
});
