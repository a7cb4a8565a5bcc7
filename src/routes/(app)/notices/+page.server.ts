import { actOnNotices, loadNotices } from '$lib/server/notices/page';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals }) => await loadNotices(locals, undefined);

export const actions: Actions = {
	act: async ({ locals, request }) => await actOnNotices(locals, request, undefined)
};
