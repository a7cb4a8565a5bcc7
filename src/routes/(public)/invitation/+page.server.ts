import { publicWords } from '$lib/format/messages/public';
import { invitationHolder, takeTicket } from '$lib/server/auth/invite';
import { fail, redirect } from '@sveltejs/kit';
import { newPassword, passwordSentence, troubleOf } from '../new-password';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ url, setHeaders }) => {
	setHeaders({ 'referrer-policy': 'no-referrer', 'cache-control': 'no-store' });
	const ticket = url.searchParams.get('ticket') ?? '';
	return { ticket, holder: await invitationHolder(ticket) };
};

export const actions: Actions = {
	default: async (event) => {
		const given = newPassword.safeParse(Object.fromEntries(await event.request.formData()));
		if (!given.success) return fail(400, { trouble: troubleOf(given.error) });
		const taken = await takeTicket(event, 'invitation', given.data);
		if (taken.ok) redirect(303, '/');
		if (taken.reason === 'ticket') return fail(410, { trouble: publicWords().usedUp });
		return fail(400, { trouble: passwordSentence(taken.why) });
	}
};
