import { DESK_REFRESH_ROUTES } from '$lib/schemas/desk-refreshes';
import { ok } from '$lib/server/api/answer';
import { isProblem } from '$lib/server/api/problem';
import { siteRoute } from '$lib/server/api/route';
import { find, notTaken } from '$lib/server/refreshes/api';
import { apply } from '$lib/server/refreshes/apply';
import type { RefreshEvent } from '$lib/server/refreshes/course';
import { siteSettings } from '$lib/server/refreshes/sheet';

export const POST = siteRoute(DESK_REFRESH_ROUTES.decide, async (ctx) => {
	const { app, site, reach, body, event, nowMs } = ctx;
	const answer = await ctx.write(async ({ sql }) => {
		const found = await find(sql, reach, event.params['id'], site.id);
		if (isProblem(found)) return found;
		const { ownApproval } = await siteSettings(sql, site.id);
		const by = { by: reach.actor, atMs: nowMs };
		const deed: RefreshEvent =
			body.deed === 'approve'
				? { kind: 'approve', anyHour: body.anyHour, ownAllowed: ownApproval, ...by }
				: { kind: 'refuse', why: body.reason, ...by };
		const done = await apply(sql, found.id, deed);
		return done.ok
			? ok({ state: done.course.state })
			: notTaken(done.reason, done.row?.state ?? 'gone');
	});
	app.nudge();
	return answer;
});
