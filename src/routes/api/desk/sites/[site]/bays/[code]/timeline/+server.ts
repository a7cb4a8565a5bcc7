import { DESK_ROUTES } from '$lib/schemas/desk';
import { ok } from '$lib/server/api/answer';
import { problem } from '$lib/server/api/problem';
import { siteRoute } from '$lib/server/api/route';
import { namesFor } from '$lib/server/auth/names';
import { byCode } from '$lib/server/store/queries/bays';
import { timeline } from '$lib/server/store/queries/desk-timeline';

const PAGE = 60;

/** Newest first; `next` is the instant to ask before. */
export const GET = siteRoute(
	DESK_ROUTES.timeline,
	async ({ app, site, reach, query, event, nowMs }) => {
		const bay = await byCode(app.store.db, site.id, event.params['code'] ?? '');
		if (bay === null) return problem(404, 'There is no such bay.');
		const rows = await timeline(app.store.db, bay.id, query.before ?? nowMs + 60_000, PAGE);
		const name = await namesFor(app, reach, nowMs);
		// Integrators see nothing of who was sent for and of visits.
		const may = reach.role !== 'integrator';
		return ok({
			items: rows
				.filter(({ what }) => may || !/^(request|visit)/.test(what))
				.map((row) => ({ ...row, by: name(row.by, row.atMs) })),
			next: rows.length < PAGE ? null : (rows.at(-1)?.atMs ?? null)
		});
	}
);
