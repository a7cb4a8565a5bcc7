import { DESK_REFRESH_ROUTES } from '$lib/schemas/desk-refreshes';
import { ok } from '$lib/server/api/answer';
import { siteRoute } from '$lib/server/api/route';
import { siteSettings } from '$lib/server/refreshes/sheet';
import * as audit from '$lib/server/store/queries/audit';
import { put } from '$lib/server/store/queries/refresh-settings';

export const PATCH = siteRoute(DESK_REFRESH_ROUTES.settings, async (ctx) => {
	const { site, reach, body, nowMs } = ctx;
	const { quietFromMin, quietToMin, pairRule, scheduleReasons, ...rest } = body;
	return await ctx.write(async ({ sql, db }) => {
		const by = { changedBy: reach.actor, changedAtMs: nowMs };
		const where = { siteId: site.id, timezone: site.timezone, quietFromMin, quietToMin, pairRule };
		const stored = { ...rest, ...by, scheduleReasons: scheduleReasons.join(',') };
		await put(sql, { ...where, stored });
		const entry = { actor: reach.actor, siteId: site.id, subject: site.slug, detail: body };
		await audit.note(db, { ...entry, what: 'refresh_settings.changed' }, nowMs);
		return ok(await siteSettings(sql, site.id));
	});
});
