import { ROUTES } from '$lib/schemas/v1/route-table';
import { ok } from '$lib/server/api/answer';
import { openapi } from '$lib/server/api/openapi';
import { route } from '$lib/server/api/route';

export const GET = route(ROUTES['GET /openapi.json'], async ({ event }) =>
	ok(openapi(event.url.origin))
);
