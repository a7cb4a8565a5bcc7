import { ROUTES } from '$lib/schemas/v1/route-table';
import { answerAct } from '$lib/server/api/acts';
import { accepted } from '$lib/server/api/answer';
import { placeIn } from '$lib/server/api/nodes';
import { isProblem, problem } from '$lib/server/api/problem';
import { nodeRoute } from '$lib/server/api/route';

const AHEAD_MS = 60_000;
/** Older rows move no state (protocol, server step 4), so an older placing would say nothing more. */
const OLDEST_MS = 14 * 86_400_000;

export const POST = nodeRoute(ROUTES['POST /nodes/{serial}/place'], async (ctx) => {
	const { app, site, node, body, reach, nowMs } = ctx;
	const atMs = body.at ?? nowMs;
	if (atMs > nowMs + AHEAD_MS) return problem(422, 'at lies in the future.');
	if (atMs < nowMs - OLDEST_MS) return problem(422, 'at lies more than 14 days back.');
	let actId = 0;
	const written = await ctx.write(async (tx) => {
		const by = { app, siteId: site.id, actor: reach.actor, nowMs };
		const placed = await placeIn(tx, by, node.id, body.bay, node.preCommissioned, atMs);
		if (isProblem(placed)) return placed;
		actId = placed;
		return accepted({ act: actId, outcome: null });
	});
	return isProblem(written) ? written : await answerAct(app, actId);
});
