import { publicWords } from '$lib/format/messages/public';
import { invitationHolder, takeTicket } from '$lib/server/auth/invite';
import { askReset } from '$lib/server/auth/reset';
import { fail, redirect } from '@sveltejs/kit';
import { z } from 'zod';
import { newPassword, passwordSentence, troubleOf } from '../new-password';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ url, setHeaders }) => {
	setHeaders({ 'referrer-policy': 'no-referrer', 'cache-control': 'no-store' });
	const ticket = url.searchParams.get('ticket');
	if (ticket === null) return { ticket: null, holder: null };
	return { ticket, holder: await invitationHolder(ticket, 'reset') };
};

const address = z.object({ email: z.email({ error: () => publicWords().trouble.email }).max(254) });

export const actions: Actions = {
	ask: async (event) => {
		const given = address.safeParse(Object.fromEntries(await event.request.formData()));
		if (!given.success) return fail(400, { trouble: troubleOf(given.error), asked: false });
		await askReset(event, given.data);
		return { asked: true, trouble: null };
	},
	take: async (event) => {
		const given = newPassword.safeParse(Object.fromEntries(await event.request.formData()));
		if (!given.success) return fail(400, { trouble: troubleOf(given.error), asked: false });
		const taken = await takeTicket(event, 'reset', given.data);
		if (taken.ok) redirect(303, '/');
		const trouble = taken.reason === 'ticket' ? publicWords().usedUp : passwordSentence(taken.why);
		return fail(taken.reason === 'ticket' ? 410 : 400, { trouble, asked: false });
	}
};
