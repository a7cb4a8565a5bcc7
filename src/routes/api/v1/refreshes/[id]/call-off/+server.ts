import { ROUTES } from '$lib/schemas/v1/route-table';
import { route } from '$lib/server/api/route';
import { callOff } from '$lib/server/refreshes/api';

export const POST = route(ROUTES['POST /refreshes/{id}/call-off'], async (ctx) => {
	const { event, reach, body, nowMs } = ctx;
	const why = body.reason ?? 'no longer wanted';
	return await ctx.write(async (tx) => await callOff(tx, reach, event.params['id'], why, nowMs));
});
