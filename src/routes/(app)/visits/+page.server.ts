import { VISIT_READERS } from '$lib/schemas/visits';
import { instance } from '$lib/server/api/instance';
import { requirePage } from '$lib/server/auth/require-page';
import { visitRegister } from '$lib/server/visits/sheet';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals }) => {
	const { reach } = await requirePage(locals, { roles: VISIT_READERS });
	const nowMs = Date.now();
	return { visits: await visitRegister(instance().store, reach, nowMs), asOfMs: nowMs };
};
