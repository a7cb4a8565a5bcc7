import { DESK_VISIT_ROUTES, WALK_STOPS } from '$lib/schemas/visits';
import { created } from '$lib/server/api/answer';
import { problem } from '$lib/server/api/problem';
import { siteRoute } from '$lib/server/api/route';
import { personIdOf } from '$lib/server/auth/reach';
import { take } from '$lib/server/visits/take';

/** Takes requests into one's own walk: those that somebody else has by now are left. */
export const POST = siteRoute(DESK_VISIT_ROUTES.take, async (ctx) => {
	const me = personIdOf(ctx.reach);
	if (me === null) return problem(403, 'Only a person takes a walk.');
	return await ctx.write(async ({ sql }) => {
		const wanted = { site: ctx.site, personId: me, ids: ctx.body.requests };
		const taken = await take(sql, wanted, ctx.nowMs);
		if (taken === 'nothing')
			return problem(409, 'All of these were taken or ended in the meantime.');
		if (taken === 'full')
			return problem(
				422,
				`A walk has at most ${WALK_STOPS} stops: take fewer, or end yours first.`
			);
		return created(taken, null);
	});
});
