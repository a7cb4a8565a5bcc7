import { errorWords } from '$lib/format/messages/error';
import { error } from '@sveltejs/kit';
import { FITTERS } from '$lib/schemas/visits';
import { instance } from '$lib/server/api/instance';
import { requirePage } from '$lib/server/auth/require-page';
import { walkView } from '$lib/server/visits/walk-view';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals, params }) => {
	const { reach, site } = await requirePage(locals, { roles: FITTERS, site: params.site });
	const visitId = Number(params.id);
	const walk = Number.isInteger(visitId)
		? await walkView(instance().store, { site, reach, visitId }, Date.now())
		: null;
	if (walk === null) error(404, errorWords().noWalk);
	return { walk };
};
