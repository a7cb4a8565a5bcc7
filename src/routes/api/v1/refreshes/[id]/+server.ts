import { ROUTES } from '$lib/schemas/v1/route-table';
import { ok } from '$lib/server/api/answer';
import { isProblem } from '$lib/server/api/problem';
import { route } from '$lib/server/api/route';
import { find } from '$lib/server/refreshes/api';
import { viewOf } from '$lib/server/refreshes/views';

export const GET = route(ROUTES['GET /refreshes/{id}'], async ({ app, reach, event }) => {
	const { pool } = app.store;
	const found = await find(pool, reach, event.params['id']);
	return isProblem(found) ? found : ok(await viewOf(pool, found));
});
