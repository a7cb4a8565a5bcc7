import { DESK_ROUTES } from '$lib/schemas/desk';
import { ok } from '$lib/server/api/answer';
import { liveView, siteLive } from '$lib/server/api/live';
import { route } from '$lib/server/api/route';
import * as register from '$lib/server/store/queries/desk-register';
import * as sites from '$lib/server/store/queries/sites';

const MOST_SITES = 500;

/** The sites register: every site in a row. */
export const GET = route(DESK_ROUTES.register, async ({ app, reach, nowMs }) => {
	const rows = await sites.page(app.store.db, reach.sites, 0, MOST_SITES);
	const ids = rows.map(({ id }) => id);
	const counts = await register.counts(app.store.db, ids, nowMs);
	const items = await Promise.all(
		rows.map(async (site) => {
			const found = counts.find(({ siteId }) => siteId === site.id);
			return {
				slug: site.slug,
				name: site.name,
				timezone: site.timezone,
				demo: site.demo,
				live: liveView(await siteLive(app, site, nowMs)),
				bays: found?.bays ?? 0,
				taken: found?.taken ?? 0,
				unknown: found?.unknown ?? 0,
				doubtful: found?.doubtful ?? 0,
				silent: found?.silent ?? 0,
				refreshDue: found?.refreshDue ?? 0,
				closed: found?.closed ?? 0,
				heardAtMs: found?.heardAtMs ?? null
			};
		})
	);
	return ok({ items, asOfMs: nowMs });
});
