import { actOnNotices, loadNotices } from '$lib/server/notices/page';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals, params }) =>
	await loadNotices(locals, params.site);

export const actions: Actions = {
	act: async ({ locals, request, params }) => await actOnNotices(locals, request, params.site)
};
