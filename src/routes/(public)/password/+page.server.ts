import { changePassword } from '$lib/server/auth/change-password';
import { words } from '$lib/format/messages';
import { publicWords } from '$lib/format/messages/public';
import { duration } from '$lib/format/duration';
import { fail, redirect } from '@sveltejs/kit';
import { newPassword, passwordSentence, troubleOf } from '../new-password';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = ({ locals }) => {
	if (locals.reach?.role == null) redirect(303, '/sign-in?to=/password');
	return { name: locals.reach.name, must: locals.reach.mustChangePassword };
};

const TROUBLES = { signed_out: 'signedOut', wrong: 'wrong', same: 'same' } as const;

export const actions: Actions = {
	default: async (event) => {
		const fields = Object.fromEntries(await event.request.formData());
		const given = newPassword.safeParse(fields);
		if (!given.success) return fail(400, { trouble: troubleOf(given.error) });
		const { current } = fields;
		const result = await changePassword(event, {
			current: typeof current === 'string' ? current : '',
			password: given.data.password
		});
		if (result.ok) redirect(303, '/');
		if (result.reason === 'throttled') {
			const wait = duration(result.retryAfterS * 1000);
			return fail(429, { trouble: words().signIn.throttled(wait) });
		}
		const trouble =
			result.reason === 'password'
				? passwordSentence(result.why)
				: publicWords().trouble[TROUBLES[result.reason]];
		return fail(400, { trouble });
	}
};
