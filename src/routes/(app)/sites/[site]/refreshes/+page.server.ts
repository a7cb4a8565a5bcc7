import { requirePage } from '$lib/server/auth/require-page';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals, params }) => {
	const { reach } = await requirePage(locals, {
		roles: ['operator', 'maintenance', 'admin'],
		site: params.site
	});
	return { mayApprove: reach.role !== 'operator' };
};
