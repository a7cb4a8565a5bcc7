import { DESK_ROUTES } from '$lib/schemas/desk';
import { noContent } from '$lib/server/api/answer';
import { problem } from '$lib/server/api/problem';
import { siteRoute } from '$lib/server/api/route';
import { personIdOf } from '$lib/server/auth/reach';
import { lock } from '$lib/server/store/queries/visit-requests';
import { handBack, take } from '$lib/server/visits/take';

/** Of two who take it at once the first has it; only who has it can hand it back. */
export const POST = siteRoute(DESK_ROUTES.take, async (ctx) => {
	const me = personIdOf(ctx.reach);
	if (me === null) return problem(403, 'Only a person takes a request.');
	return await ctx.write(async ({ sql }) => {
		const id = Number(ctx.event.params['id']);
		const [found] = Number.isInteger(id) ? await lock(sql, ctx.site.id, [id]) : [];
		if (found === undefined) return problem(404, 'There is no such request.');
		if (found.endedAtMs !== null) return problem(409, 'This was ended in the meantime.');
		const others = found.takenBy !== null && found.takenBy !== me;
		if (others) return problem(409, 'Somebody else has taken it in the meantime.');
		if (!ctx.body.hold) {
			await handBack(sql, found.id, ctx.nowMs);
			return noContent();
		}
		const taken = await take(sql, { site: ctx.site, personId: me, ids: [id] }, ctx.nowMs);
		if (taken === 'full') return problem(422, 'This walk is full: end it, or hand stops back.');
		return noContent();
	});
});
