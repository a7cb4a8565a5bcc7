import { DESK_ROUTES } from '$lib/schemas/desk';
import { noContent } from '$lib/server/api/answer';
import { problem } from '$lib/server/api/problem';
import { siteRoute } from '$lib/server/api/route';
import { personIdOf } from '$lib/server/auth/reach';
import { endByHand } from '$lib/server/visits/ask';

/** Ends a request without a walk, or in the middle of one. */
export const POST = siteRoute(DESK_ROUTES.end, async (ctx) => {
	const me = personIdOf(ctx.reach);
	if (me === null) return problem(403, 'Only a person ends a request.');
	const answer = await ctx.write(async ({ sql }) => {
		const id = Number(ctx.event.params['id']);
		const ended = await endByHand(
			sql,
			{ siteId: ctx.site.id, id, me, outcome: ctx.body.outcome },
			ctx.nowMs
		);
		if (ended === 'not_there') return problem(404, 'There is no such request.');
		if (ended === 'ended') return problem(409, 'This was ended in the meantime.');
		return noContent();
	});
	ctx.app.nudgeNotices();
	return answer;
});
