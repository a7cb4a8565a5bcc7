import { ROUTES } from '$lib/schemas/v1/route-table';
import { noContent } from '$lib/server/api/answer';
import { bayDetail, findBay, patchBay } from '$lib/server/api/bay-detail';
import { isProblem, problem } from '$lib/server/api/problem';
import { siteRoute } from '$lib/server/api/route';
import * as audit from '$lib/server/store/queries/audit';
import * as bays from '$lib/server/store/queries/bays';
import * as changes from '$lib/server/store/queries/changes';
import * as nodes from '$lib/server/store/queries/nodes';

export const GET = siteRoute(ROUTES['GET /sites/{site}/bays/{code}'], async (ctx) => {
	const bay = await findBay(ctx, ctx.event.params.code);
	return isProblem(bay) ? bay : await bayDetail(ctx.app, ctx.app.store.db, bay.id, ctx.nowMs);
});

export const PATCH = siteRoute(ROUTES['PATCH /sites/{site}/bays/{code}'], async (ctx) => {
	const { app, site, reach, body, nowMs } = ctx;
	const bay = await findBay(ctx, ctx.event.params.code);
	if (isProblem(bay)) return bay;
	const written = await ctx.write(async (tx) => {
		const trouble = await patchBay(tx, site.id, bay, body, nowMs);
		if (trouble !== null) return trouble;
		await audit.note(
			tx.db,
			{ actor: reach.actor, siteId: site.id, what: 'bay.changed', subject: bay.code },
			nowMs
		);
		return await bayDetail(app, tx.db, bay.id, nowMs);
	});
	app.nudge();
	return written;
});

export const DELETE = siteRoute(ROUTES['DELETE /sites/{site}/bays/{code}'], async (ctx) => {
	const { site, reach, nowMs } = ctx;
	const bay = await findBay(ctx, ctx.event.params.code);
	if (isProblem(bay)) return bay;
	const written = await ctx.write(async ({ db, sql }) => {
		const node = await nodes.ofBay(db, bay.id);
		if (node !== null) {
			return problem(409, `The node ${node.serial} is in this bay: withdraw it first.`);
		}
		await bays.remove(db, bay.id, nowMs);
		const removed = { kind: 'removed' as const, bayId: bay.id, nodeId: null };
		await changes.append(sql, site.id, [removed], nowMs);
		await audit.note(
			db,
			{ actor: reach.actor, siteId: site.id, what: 'bay.removed', subject: bay.code },
			nowMs
		);
		return noContent();
	});
	ctx.app.nudge();
	return written;
});
