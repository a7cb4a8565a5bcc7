import { DESK_VISIT_ROUTES } from '$lib/schemas/visits';
import { ok } from '$lib/server/api/answer';
import { problem } from '$lib/server/api/problem';
import { siteRoute } from '$lib/server/api/route';
import { personIdOf } from '$lib/server/auth/reach';
import { record } from '$lib/server/visits/record';
import { isUuid, refusalOf } from '$lib/server/visits/refusals';

/** Idempotent by the phone's own id: the same sent twice is answered the same and kept once. */
export const PUT = siteRoute(DESK_VISIT_ROUTES.record, async (ctx) => {
	const me = personIdOf(ctx.reach);
	const id = ctx.event.params['recording'] ?? '';
	if (me === null) return problem(403, 'Only a person records something.');
	if (!isUuid(id)) return problem(400, 'The id of a recording is a UUID in lower case.');
	const visitId = Number(ctx.event.params['id']);
	const answer = await ctx.write(async ({ sql }) => {
		const wanted = { siteId: ctx.site.id, visitId, id, me, body: ctx.body };
		const done = await record(sql, wanted, ctx.nowMs);
		return done.ok ? ok({ verdict: done.verdict, again: done.again }) : refusalOf(done.why);
	});
	ctx.app.nudgeNotices();
	return answer;
});
