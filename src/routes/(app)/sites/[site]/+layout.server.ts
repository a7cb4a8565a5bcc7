import { errorWords } from '$lib/format/messages/error';
import { error } from '@sveltejs/kit';
import type { LayoutServerLoad } from './$types';

/** A site that is not there and one out of reach look the same. */
export const load: LayoutServerLoad = async ({ params, parent }) => {
	const { sites } = await parent();
	const site = sites.find(({ slug }) => slug === params.site);
	if (site === undefined) error(404, errorWords().noSite);
	return { site };
};
