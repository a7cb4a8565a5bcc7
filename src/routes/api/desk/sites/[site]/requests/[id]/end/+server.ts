import { DESK_ROUTES } from '$lib/schemas/desk';
import { noContent } from '$lib/server/api/answer';
import { problem } from '$lib/server/api/problem';
import { siteRoute } from '$lib/server/api/route';
import { personIdOf } from '$lib/server/auth/reach';
import * as requests from '$lib/server/store/queries/desk-requests';

export const POST = siteRoute(DESK_ROUTES.end, async (ctx) => {
	const me = personIdOf(ctx.reach);
	if (me === null) return problem(403, 'Only a person ends a request.');
	return await ctx.write(async ({ db }) => {
		const found = await requests.byId(db, ctx.site.id, Number(ctx.event.params['id']));
		if (found === null) return problem(404, 'There is no such request.');
		if (found.endedAtMs !== null) return problem(409, 'This was ended in the meantime.');
		await requests.end(db, found.id, { by: me, atMs: ctx.nowMs, outcome: ctx.body.outcome });
		return noContent();
	});
});
