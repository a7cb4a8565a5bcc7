import { DESK_ROUTES } from '$lib/schemas/desk';
import { created } from '$lib/server/api/answer';
import { problem } from '$lib/server/api/problem';
import { siteRoute } from '$lib/server/api/route';
import * as acts from '$lib/server/store/queries/act-requests';
import { byCode } from '$lib/server/store/queries/bays';
import { actById } from '$lib/server/store/queries/desk-acts';

/** Method 4, settling: undo for 24 h. */
const UNDO_MS = 86_400_000;

export const POST = siteRoute(DESK_ROUTES.undo, async (ctx) => {
	const { site, reach, nowMs, body, event } = ctx;
	return await ctx.write(async ({ db }) => {
		const bay = await byCode(db, site.id, event.params['code'] ?? '');
		const settled = await actById(db, site.id, body.act);
		if (bay === null || settled?.kind !== 'settle' || settled.bayId !== bay.id) {
			return problem(404, 'There is no such settling.');
		}
		if (nowMs - settled.recordedAtMs > UNDO_MS) {
			return problem(422, 'A settling can be undone for 24 h; settle the bay anew.');
		}
		const act = await acts.request(
			db,
			{
				siteId: site.id,
				nodeId: settled.nodeId,
				bayId: bay.id,
				kind: 'undo_settle',
				args: { settleActId: settled.id },
				atMs: nowMs,
				byActor: reach.actor
			},
			nowMs
		);
		return created({ act }, null);
	});
});
