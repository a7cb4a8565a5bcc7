import { errorWords } from '$lib/format/messages/error';
import { ask, AskError } from '$lib/components/live/ask';
import type { BayDetail } from '$lib/components/node/types';
import { error } from '@sveltejs/kit';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ params, fetch }) => {
	const path = `/api/v1/sites/${params.site}/bays/${encodeURIComponent(params.code)}`;
	try {
		return { bay: (await ask<BayDetail>(path, {}, fetch)).body };
	} catch (problem) {
		if (problem instanceof AskError && problem.status === 404)
			error(404, errorWords().noBay(params.code));
		throw problem;
	}
};
