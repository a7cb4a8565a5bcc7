import { DESK_ROUTES } from '$lib/schemas/desk';
import { noContent } from '$lib/server/api/answer';
import { problem } from '$lib/server/api/problem';
import { siteRoute } from '$lib/server/api/route';
import { personIdOf } from '$lib/server/auth/reach';
import * as requests from '$lib/server/store/queries/desk-requests';

/** Of two who take it at once the first has it; only who has it can hand it back. */
export const POST = siteRoute(DESK_ROUTES.take, async (ctx) => {
	const me = personIdOf(ctx.reach);
	if (me === null) return problem(403, 'Only a person takes a request.');
	return await ctx.write(async ({ db }) => {
		const found = await requests.byId(db, ctx.site.id, Number(ctx.event.params['id']));
		if (found === null) return problem(404, 'There is no such request.');
		if (found.endedAtMs !== null) return problem(409, 'This was ended in the meantime.');
		const others = found.takenBy !== null && found.takenBy !== me;
		if (others) return problem(409, 'Somebody else has taken it in the meantime.');
		await requests.hold(db, found.id, ctx.body.hold ? me : null, ctx.nowMs);
		return noContent();
	});
});
