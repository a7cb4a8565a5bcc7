import { errorWords } from '$lib/format/messages/error';
import { isLanguage } from '$lib/format/messages';
import { instance } from '$lib/server/api/instance';
import { languageOf, setLanguage } from '$lib/server/auth/language';
import { personIdOf } from '$lib/server/auth/reach';
import { setLanguage as keepLanguage } from '$lib/server/store/queries/people';
import { error, fail, redirect } from '@sveltejs/kit';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = (event) => ({ language: languageOf(event) });

export const actions: Actions = {
	/** Kept with the person, and in this browser for the sheets before sign-in. */
	language: async ({ locals, request, cookies }) => {
		const personId = locals.reach === null ? null : personIdOf(locals.reach);
		if (personId === null) error(401, errorWords().signIn);
		const wanted = (await request.formData()).get('language');
		if (typeof wanted !== 'string' || !isLanguage(wanted))
			return fail(400, { trouble: errorWords().language });
		const app = instance();
		await keepLanguage(app.store.db, personId, wanted);
		setLanguage(cookies, wanted, app.secureCookies);
		// The answer to this request would still speak the former language.
		redirect(303, '/desk');
	}
};
