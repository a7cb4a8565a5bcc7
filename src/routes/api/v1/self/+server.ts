import { ok } from '$lib/server/api/answer';
import { POLICIES } from '$lib/server/api/rate-limit';
import { route } from '$lib/server/api/route';
import { rfc3339OrNull } from '$lib/server/api/time';
import { ROUTES } from '$lib/schemas/v1/route-table';
import { slugsOf } from '$lib/server/store/queries/sites';

const PAGE_ITEMS = 1000;

export const GET = route(ROUTES['GET /self'], async ({ app, event, reach }) => {
	const policy = reach.role === null ? POLICIES.key : POLICIES.person;
	return ok({
		name: reach.name,
		kind: reach.role === null ? 'key' : 'person',
		role: reach.role,
		scopes: [...reach.scopes],
		sites: reach.sites === 'all' ? 'all' : await slugsOf(app.store.db, reach.sites),
		expiresAt: rfc3339OrNull(event.locals.key?.expiresAtMs ?? null),
		personalAllowed: reach.personalAllowed,
		limits: { requests: policy.requests, windowS: policy.windowS, pageItems: PAGE_ITEMS }
	});
});
