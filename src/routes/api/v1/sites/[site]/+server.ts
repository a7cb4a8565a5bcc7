import { ROUTES } from '$lib/schemas/v1/route-table';
import { noContent, ok } from '$lib/server/api/answer';
import { siteRoute } from '$lib/server/api/route';
import { siteDetail, siteValues, siteView } from '$lib/server/api/sites';
import * as audit from '$lib/server/store/queries/audit';
import * as changes from '$lib/server/store/queries/changes';
import * as sites from '$lib/server/store/queries/sites';

const SITE_CHANGED = [{ kind: 'site' as const, bayId: null, nodeId: null }];

export const GET = siteRoute(
	ROUTES['GET /sites/{site}'],
	async ({ app, site, reach, nowMs }) => await siteDetail(app, site, reach.personalAllowed, nowMs)
);

export const PATCH = siteRoute(ROUTES['PATCH /sites/{site}'], async (ctx) => {
	const { site, body, reach, nowMs } = ctx;
	const written = await ctx.write(async ({ db, sql }) => {
		await sites.patch(db, site.id, siteValues(body));
		await changes.append(sql, site.id, SITE_CHANGED, nowMs);
		await audit.note(
			db,
			{
				actor: reach.actor,
				siteId: site.id,
				what: 'site.changed',
				subject: site.slug,
				detail: body
			},
			nowMs
		);
		return ok(siteView((await sites.byId(db, site.id)) ?? site));
	});
	ctx.app.nudge();
	return written;
});

export const DELETE = siteRoute(ROUTES['DELETE /sites/{site}'], async (ctx) => {
	const { site, reach, nowMs } = ctx;
	const written = await ctx.write(async ({ db, sql }) => {
		await changes.append(sql, site.id, SITE_CHANGED, nowMs);
		await sites.remove(db, site.id, nowMs);
		await audit.note(
			db,
			{ actor: reach.actor, siteId: site.id, what: 'site.removed', subject: site.slug },
			nowMs
		);
		return noContent();
	});
	ctx.app.nudge();
	return written;
});
