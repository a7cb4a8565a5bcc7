import { DESK_ROUTES } from '$lib/schemas/desk';
import { ok } from '$lib/server/api/answer';
import { route } from '$lib/server/api/route';
import { find } from '$lib/server/store/queries/desk-find';

const MOST = 12;

export const GET = route(DESK_ROUTES.find, async ({ app, reach, query }) => {
	const found = await find(app.store.db, reach.sites, query.q, MOST);
	return ok({
		items: found.map((one) => ({
			...one,
			href: `/sites/${one.site}/bays/${encodeURIComponent(one.bay)}`
		}))
	});
});
