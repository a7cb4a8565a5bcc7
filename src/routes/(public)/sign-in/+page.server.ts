import { PATHS, safeReturn } from '$lib/server/auth/paths';
import { signIn } from '$lib/server/auth/sign-in';
import { words } from '$lib/format/messages';
import { duration } from '$lib/format/duration';
import { fail, redirect } from '@sveltejs/kit';
import { z } from 'zod';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = ({ locals, url }) => {
	const to = safeReturn(url.searchParams.get('to'));
	if (locals.reach?.role != null)
		redirect(303, locals.reach.mustChangePassword ? PATHS.password : to);
	return { to, left: url.searchParams.get('left') === '1' };
};

const form = z.object({
	email: z
		.string()
		.trim()
		.min(1, { error: () => words().signIn.emailMissing })
		.max(254),
	password: z
		.string()
		.min(1, { error: () => words().signIn.passwordMissing })
		.max(1000),
	to: z.string().max(2000).nullable().catch(null)
});

export const actions: Actions = {
	default: async (event) => {
		const given = form.safeParse(Object.fromEntries(await event.request.formData()));
		if (!given.success) {
			return fail(400, {
				trouble: given.error.issues[0]?.message ?? words().signIn.failed,
				email: ''
			});
		}
		const result = await signIn(event, given.data);
		if (result.ok) redirect(303, result.mustChangePassword ? PATHS.password : result.to);
		const trouble =
			result.reason === 'throttled'
				? words().signIn.throttled(duration(result.retryAfterS * 1000))
				: words().signIn.wrong;
		return fail(result.reason === 'throttled' ? 429 : 400, { trouble, email: given.data.email });
	}
};
