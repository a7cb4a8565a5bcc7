import { DESK_ROUTES } from '$lib/schemas/desk';
import { duration } from '$lib/format/duration';
import { created } from '$lib/server/api/answer';
import { problem } from '$lib/server/api/problem';
import { siteRoute } from '$lib/server/api/route';
import * as acts from '$lib/server/store/queries/act-requests';
import { byCode } from '$lib/server/store/queries/bays';
import { lastAct } from '$lib/server/store/queries/desk-acts';
import { ofBay } from '$lib/server/store/queries/nodes';
import { stormNodeIds } from '$lib/server/store/queries/notices';

/** A node pays for each answer with its battery. */
const EVERY_MS = 600_000;

/** A reading and a report now, at most every 10 min a node. */
export const POST = siteRoute(DESK_ROUTES.ask, async (ctx) => {
	const { site, reach, nowMs, event } = ctx;
	return await ctx.write(async ({ db, sql }) => {
		const bay = await byCode(db, site.id, event.params['code'] ?? '');
		const node = bay === null ? null : await ofBay(db, bay.id);
		if (bay === null) return problem(404, 'There is no such bay.');
		if (node === null) return problem(422, `${bay.code} has no node that could be asked.`);
		if ((await stormNodeIds(sql, [site.id])).has(node.id))
			return problem(
				409,
				`${node.serial} fell silent together with others: commands to them wait until they are heard. See the notices.`
			);
		const last = await lastAct(db, node.id, 'ask');
		const waitMs = last === null ? 0 : last.recordedAtMs + EVERY_MS - nowMs;
		if (waitMs > 0) {
			return problem(429, `${node.serial} was asked already; again in ${duration(waitMs)}.`, {
				headers: { 'retry-after': String(Math.ceil(waitMs / 1000)) }
			});
		}
		const act = await acts.request(
			db,
			{
				siteId: site.id,
				nodeId: node.id,
				bayId: bay.id,
				kind: 'ask',
				args: {},
				atMs: nowMs,
				byActor: reach.actor
			},
			nowMs
		);
		return created({ act }, null);
	});
});
