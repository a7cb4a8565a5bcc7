import { DESK_VISIT_ROUTES } from '$lib/schemas/visits';
import { noContent } from '$lib/server/api/answer';
import { problem } from '$lib/server/api/problem';
import { siteRoute } from '$lib/server/api/route';
import { personIdOf } from '$lib/server/auth/reach';
import { byId } from '$lib/server/store/queries/visits';
import { endWalk } from '$lib/server/visits/take';

/** One's own; an admin ends anybody's, so that no bay waits for who has left. */
export const POST = siteRoute(DESK_VISIT_ROUTES.end, async (ctx) => {
	return await ctx.write(async ({ sql }) => {
		const id = Number(ctx.event.params['id']);
		const walk = Number.isInteger(id) ? await byId(sql, ctx.site.id, id) : null;
		if (walk === null) return problem(404, 'There is no such walk.');
		if (walk.endedAtMs !== null) return problem(409, 'This walk is over already.');
		const may = walk.takenBy === personIdOf(ctx.reach) || ctx.reach.role === 'admin';
		if (!may) return problem(403, 'Only who walks it, or an admin, ends a walk.');
		await endWalk(sql, walk.id, ctx.nowMs);
		return noContent();
	});
});
