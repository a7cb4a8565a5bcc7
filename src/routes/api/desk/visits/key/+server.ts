import { DESK_VISIT_ROUTES } from '$lib/schemas/visits';
import { ok } from '$lib/server/api/answer';
import { problem } from '$lib/server/api/problem';
import { route } from '$lib/server/api/route';
import { personIdOf } from '$lib/server/auth/reach';
import { waitingKeys } from '$lib/server/visits/waiting-keys';

/** This person's own: what they recorded without a connection can be read by nobody else. */
export const GET = route(DESK_VISIT_ROUTES.key, async ({ app, reach }) => {
	const me = personIdOf(reach);
	if (me === null) return problem(403, 'Only a person records something.');
	const { secret, secretPrevious } = app.config;
	return ok({ keys: waitingKeys([secret, secretPrevious], me) }, { secret: true });
});
