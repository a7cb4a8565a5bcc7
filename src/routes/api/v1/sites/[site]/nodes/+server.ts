import { ROUTES } from '$lib/schemas/v1/route-table';
import { created } from '$lib/server/api/answer';
import { addNodes, listNodes } from '$lib/server/api/nodes';
import { isProblem } from '$lib/server/api/problem';
import { siteRoute } from '$lib/server/api/route';
import * as audit from '$lib/server/store/queries/audit';

export const GET = siteRoute(
	ROUTES['GET /sites/{site}/nodes'],
	async ({ app, site, reach, query }) => {
		const { limit, cursor } = query;
		return await listNodes(app, {
			siteId: site.id,
			personal: reach.personalAllowed,
			limit,
			cursor
		});
	}
);

export const POST = siteRoute(ROUTES['POST /sites/{site}/nodes'], async (ctx) => {
	const { app, site, reach, body, nowMs } = ctx;
	const written = await ctx.write(async (tx) => {
		const by = { app, siteId: site.id, actor: reach.actor, nowMs };
		const added = await addNodes(tx, by, body);
		if (isProblem(added)) return added;
		const subject = `${body.length} nodes`;
		await audit.note(
			tx.db,
			{ actor: reach.actor, siteId: site.id, what: 'nodes.registered', subject },
			nowMs
		);
		return created(added, `/api/v1/sites/${site.slug}/nodes`, { secret: true });
	});
	app.nudge();
	return written;
});
