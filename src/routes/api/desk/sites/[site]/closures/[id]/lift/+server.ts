import { DESK_ROUTES } from '$lib/schemas/desk';
import { created } from '$lib/server/api/answer';
import { problem } from '$lib/server/api/problem';
import { siteRoute } from '$lib/server/api/route';
import * as acts from '$lib/server/store/queries/act-requests';
import * as changes from '$lib/server/store/queries/changes';
import { closureById, liftClosure } from '$lib/server/store/queries/desk-acts';
import { ofBay } from '$lib/server/store/queries/nodes';

/** Ends a closure before its time; the pipeline then holds the quiet field against the reference. */
export const POST = siteRoute(DESK_ROUTES.lift, async (ctx) => {
	const { site, reach, nowMs, event } = ctx;
	return await ctx.write(async ({ db, sql }) => {
		const found = await closureById(db, site.id, Number(event.params['id']));
		if (found === null) return problem(404, 'There is no such closure.');
		if (found.liftedAtMs !== null || found.toMs <= nowMs) {
			return problem(409, 'This closure is over already.');
		}
		await liftClosure(db, found.id, nowMs);
		const node = await ofBay(db, found.bayId);
		const act = await acts.request(
			db,
			{
				siteId: site.id,
				nodeId: node?.id ?? null,
				bayId: found.bayId,
				kind: 'lift',
				args: { closureId: found.id },
				atMs: nowMs,
				byActor: reach.actor
			},
			nowMs
		);
		const change = { kind: 'closure' as const, bayId: found.bayId, nodeId: null };
		await changes.append(sql, site.id, [change], nowMs);
		return created({ act }, null);
	});
});
