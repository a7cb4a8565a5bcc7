import { ROUTES } from '$lib/schemas/v1/route-table';
import { created } from '$lib/server/api/answer';
import { addBays, baysGiven, listBays } from '$lib/server/api/bays';
import { isProblem } from '$lib/server/api/problem';
import { siteRoute } from '$lib/server/api/route';
import * as audit from '$lib/server/store/queries/audit';

export const GET = siteRoute(ROUTES['GET /sites/{site}/bays'], async (ctx) => {
	const { app, site, reach, query, media, nowMs } = ctx;
	const { limit, cursor, changes } = query;
	const personal = reach.personalAllowed;
	return await listBays(app, { site, personal, limit, cursor, changes, media, nowMs });
});

export const POST = siteRoute(ROUTES['POST /sites/{site}/bays'], async (ctx) => {
	const { site, body, reach, nowMs } = ctx;
	const given = baysGiven(body);
	if (isProblem(given)) return given;
	return await ctx.write(async (tx) => {
		const added = await addBays(tx, site.id, given, nowMs);
		if (isProblem(added)) return added;
		const subject = `${given.length} bays`;
		await audit.note(
			tx.db,
			{ actor: reach.actor, siteId: site.id, what: 'bays.added', subject },
			nowMs
		);
		const items = given.map(({ code, zone }) => ({ code, zone }));
		return created({ items, changes: added.changes }, `/api/v1/sites/${site.slug}/bays`);
	});
});
