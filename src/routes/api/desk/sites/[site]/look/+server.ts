import { DESK_ROUTES } from '$lib/schemas/desk';
import { noContent } from '$lib/server/api/answer';
import { siteRoute } from '$lib/server/api/route';
import { personIdOf } from '$lib/server/auth/reach';
import { mark } from '$lib/server/store/queries/desk-looks';

/** Remembers that this person looked at the plan now, for 'Since you were last here'. */
export const POST = siteRoute(DESK_ROUTES.look, async ({ app, site, reach, body, nowMs }) => {
	const personId = personIdOf(reach);
	if (personId !== null) {
		await mark(app.store.db, { personId, siteId: site.id, changeId: body.changes, atMs: nowMs });
	}
	return noContent();
});
