import { ROUTES } from '$lib/schemas/v1/route-table';
import { waitForOutcome } from '$lib/server/api/acts';
import { created, ok } from '$lib/server/api/answer';
import { badCursor } from '$lib/server/api/bays';
import { close, closureView } from '$lib/server/api/closures';
import { decodeCursor, encodeCursor, idCursor } from '$lib/server/api/cursor';
import { isProblem } from '$lib/server/api/problem';
import { siteRoute } from '$lib/server/api/route';
import * as audit from '$lib/server/store/queries/audit';
import * as changes from '$lib/server/store/queries/changes';
import * as closures from '$lib/server/store/queries/closures';
import { snapshot } from '$lib/server/store/transaction';

export const GET = siteRoute(ROUTES['GET /sites/{site}/closures'], async (ctx) => {
	const { app, site, reach, query, nowMs } = ctx;
	const at = query.cursor === undefined ? { after: 0 } : decodeCursor(idCursor, query.cursor);
	if (at === null) return badCursor();
	const page = { siteId: site.id, personal: reach.personalAllowed, nowMs };
	return await snapshot(app.store, async (tx) => {
		const changeId = await changes.cursor(tx.sql, site.id);
		const rows = await closures.page(tx.db, {
			...page,
			afterId: at.after,
			limit: query.limit + 1
		});
		const shown = rows.slice(0, query.limit);
		const last = shown.at(-1);
		const more = rows.length > query.limit && last !== undefined;
		const next = more ? encodeCursor({ after: last.id }) : null;
		return ok({ items: shown.map(closureView), next }, { changeId });
	});
});

export const POST = siteRoute(ROUTES['POST /sites/{site}/closures'], async (ctx) => {
	const { app, site, reach, body, nowMs } = ctx;
	let actId: number | null = null;
	const written = await ctx.write(async (tx) => {
		const by = { siteId: site.id, actor: reach.actor, personal: reach.personalAllowed, nowMs };
		const made = await close(tx, by, body);
		if (isProblem(made)) return made;
		actId = made.actId;
		await audit.note(
			tx.db,
			{
				actor: reach.actor,
				siteId: site.id,
				what: 'bays.closed',
				subject: `${made.items.length} bays`,
				detail: { reason: body.reason }
			},
			nowMs
		);
		return created({ items: made.items, outcome: null }, `/api/v1/sites/${site.slug}/closures`);
	});
	app.nudge();
	if (isProblem(written) || actId === null) return written;
	const outcome = await waitForOutcome(app, actId);
	return { ...written, body: { ...(written.body as object), outcome } };
});
