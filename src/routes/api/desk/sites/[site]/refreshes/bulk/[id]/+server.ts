import { DESK_REFRESH_ROUTES } from '$lib/schemas/desk-refreshes';
import { ok } from '$lib/server/api/answer';
import { problem } from '$lib/server/api/problem';
import { siteRoute } from '$lib/server/api/route';
import { actOnBulk } from '$lib/server/refreshes/bulk';
import { siteSettings } from '$lib/server/refreshes/sheet';
import { bulkById } from '$lib/server/store/queries/refresh-views';

export const POST = siteRoute(DESK_REFRESH_ROUTES.bulkDeed, async (ctx) => {
	const { app, site, reach, body, event, nowMs } = ctx;
	const answer = await ctx.write(async ({ sql }) => {
		const bulk = await bulkById(sql, site.id, Number(event.params['id']));
		if (bulk === null) return problem(404, 'There is no such bulk order.');
		if (bulk.endedAtMs !== null) return problem(409, 'It has ended by now.');
		const { ownApproval } = await siteSettings(sql, site.id);
		const act = { ...body, by: reach.actor, why: 'the bulk order was called off' };
		const done = await actOnBulk(sql, bulk.id, { ...act, ownAllowed: ownApproval }, nowMs);
		if (done.moved === 0 && done.own > 0)
			return problem(403, 'Nobody approves their own request here: another person does.');
		return ok(done);
	});
	app.nudge();
	return answer;
});
