import { firstScreen } from '$lib/components/sheet/sheets';
import { redirect } from '@sveltejs/kit';
import type { PageServerLoad } from './$types';

/** Each role has its first screen. */
export const load: PageServerLoad = async ({ parent }) => {
	const { person, sites } = await parent();
	redirect(
		303,
		firstScreen(
			person.role,
			sites.map(({ slug }) => slug)
		)
	);
};
