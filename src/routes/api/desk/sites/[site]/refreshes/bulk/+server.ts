import { DESK_REFRESH_ROUTES } from '$lib/schemas/desk-refreshes';
import { created } from '$lib/server/api/answer';
import { problem } from '$lib/server/api/problem';
import { siteRoute } from '$lib/server/api/route';
import { isDuplicate, NOT_ASKED } from '$lib/server/refreshes/ask';
import { orderBulk } from '$lib/server/refreshes/bulk';

export const POST = siteRoute(DESK_REFRESH_ROUTES.bulk, async (ctx) => {
	const { site, reach, body, nowMs } = ctx;
	return await ctx.write(async ({ sql }) => {
		const order = { siteId: site.id, personal: reach.personalAllowed, by: reach.actor, ...body };
		try {
			const made = await orderBulk(sql, order, nowMs);
			return made === null
				? problem(422, 'None of these bays qualifies: look at the preview for why.')
				: created(made, null);
		} catch (error) {
			if (!isDuplicate(error)) throw error;
			return problem(409, `For one of them ${NOT_ASKED.open_already}: look again.`);
		}
	});
});
