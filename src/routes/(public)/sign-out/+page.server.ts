import { signOut } from '$lib/server/auth/sign-out';
import { redirect } from '@sveltejs/kit';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = ({ locals }) => {
	if (locals.reach?.role == null) redirect(303, '/sign-in');
	return { name: locals.reach.name };
};

export const actions: Actions = {
	default: (event) => {
		signOut(event);
		redirect(303, '/sign-in?left=1');
	}
};
