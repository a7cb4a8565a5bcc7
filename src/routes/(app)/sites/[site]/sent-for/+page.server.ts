import { redirect } from '@sveltejs/kit';
import type { PageServerLoad } from './$types';

/** The sheet's former address, as older mails have it; a site out of reach is not there, as anywhere. */
export const load: PageServerLoad = async ({ params, parent }) => {
	await parent();
	redirect(308, `/sites/${params.site}/visits`);
};
