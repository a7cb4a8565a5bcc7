import { ROUTES } from '$lib/schemas/v1/route-table';
import { doAct } from '$lib/server/api/acts';
import { findBay } from '$lib/server/api/bay-detail';
import { isProblem, problem } from '$lib/server/api/problem';
import { siteRoute } from '$lib/server/api/route';
import * as nodes from '$lib/server/store/queries/nodes';

/** How far a person's clock may be ahead of ours. */
const AHEAD_MS = 60_000;
/** What was seen longer ago is no word on the present state (undo is possible for as long). */
const AGO_MS = 24 * 3_600_000;

export const POST = siteRoute(ROUTES['POST /sites/{site}/bays/{code}/settle'], async (ctx) => {
	const { app, site, reach, body, nowMs } = ctx;
	const bay = await findBay(ctx, ctx.event.params.code);
	if (isProblem(bay)) return bay;
	const atMs = body.at ?? nowMs;
	if (atMs > nowMs + AHEAD_MS) return problem(422, 'at lies in the future.');
	if (atMs < nowMs - AGO_MS) return problem(422, 'at lies more than 24 h back.');
	const node = await nodes.ofBay(app.store.db, bay.id);
	if (node === null) return problem(422, 'There is no node in this bay: nothing to settle.');
	return await doAct(ctx, {
		siteId: site.id,
		nodeId: node.id,
		bayId: bay.id,
		kind: 'settle',
		args: { as: body.as },
		atMs: Math.min(atMs, nowMs),
		byActor: reach.actor
	});
});
