import { ROUTES } from '$lib/schemas/v1/route-table';
import { nodeDetail, nodeValues } from '$lib/server/api/nodes';
import { accepted } from '$lib/server/api/answer';
import { isProblem, problem } from '$lib/server/api/problem';
import { nodeRoute } from '$lib/server/api/route';
import { request } from '$lib/server/store/queries/act-requests';
import * as audit from '$lib/server/store/queries/audit';
import * as nodes from '$lib/server/store/queries/nodes';
import { ensure } from '$lib/server/store/queries/profiles';

export const GET = nodeRoute(
	ROUTES['GET /nodes/{serial}'],
	async ({ app, node }) => await nodeDetail(app, node.serial)
);

export const PATCH = nodeRoute(ROUTES['PATCH /nodes/{serial}'], async (ctx) => {
	const { app, site, node, body, reach, nowMs } = ctx;
	const written = await ctx.write(async ({ db }) => {
		if (body.profile !== undefined && !(await ensure(db, body.profile, nowMs))) {
			return problem(422, `There is no sensor profile '${body.profile}'.`);
		}
		await nodes.patch(db, node.id, nodeValues(body));
		const what = { siteId: site.id, nodeId: node.id, bayId: node.bayId, byActor: reach.actor };
		await request(db, { ...what, kind: 'parameters', args: {}, atMs: nowMs }, nowMs);
		await audit.note(
			db,
			{
				actor: reach.actor,
				siteId: site.id,
				what: 'node.changed',
				subject: node.serial,
				detail: body
			},
			nowMs
		);
		return accepted(null);
	});
	if (isProblem(written)) return written;
	app.nudge();
	return await nodeDetail(app, node.serial);
});
