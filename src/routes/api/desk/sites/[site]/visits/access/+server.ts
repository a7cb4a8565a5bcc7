import { DESK_VISIT_ROUTES } from '$lib/schemas/visits';
import { noContent } from '$lib/server/api/answer';
import { problem } from '$lib/server/api/problem';
import { siteRoute } from '$lib/server/api/route';
import { save } from '$lib/server/store/queries/site-access';

/** Two who write at once: the second is told, and overwrites nothing. */
export const PUT = siteRoute(DESK_VISIT_ROUTES.access, async (ctx) => {
	return await ctx.write(async ({ sql }) => {
		const saved = await save(sql, ctx.site.id, ctx.body, ctx.nowMs);
		return saved
			? noContent()
			: problem(
					409,
					'Somebody else changed these notes in the meantime. Look at theirs, then write yours again.'
				);
	});
});
