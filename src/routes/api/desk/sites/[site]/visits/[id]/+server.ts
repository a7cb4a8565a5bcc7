import { DESK_VISIT_ROUTES } from '$lib/schemas/visits';
import { ok } from '$lib/server/api/answer';
import { problem } from '$lib/server/api/problem';
import { siteRoute } from '$lib/server/api/route';
import { walkView } from '$lib/server/visits/walk-view';

export const GET = siteRoute(DESK_VISIT_ROUTES.walk, async ({ app, site, reach, event, nowMs }) => {
	const visitId = Number(event.params['id']);
	const { role } = reach;
	const view =
		role === null || !Number.isInteger(visitId)
			? null
			: await walkView(app.store, { site, reach: { ...reach, role }, visitId }, nowMs);
	return view === null ? problem(404, 'There is no such walk.') : ok(view);
});
