import { instance } from '$lib/server/api/instance';
import { unsubscribe, unsubscribeView } from '$lib/server/notices/mail-links';
import { fail } from '@sveltejs/kit';
import type { Actions, PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ url, setHeaders }) => {
	setHeaders({ 'referrer-policy': 'no-referrer', 'cache-control': 'no-store' });
	return await unsubscribeView(instance(), url.searchParams.get('token'), Date.now());
};

export const actions: Actions = {
	/**
	 * RFC 8058: mail programs post `List-Unsubscribe=One-Click` to the address itself, without cookie or
	 * Origin. The sealed token in the address is all that counts; a session is not looked at.
	 */
	default: async ({ url }) => {
		const done = await unsubscribe(instance(), url.searchParams.get('token'), Date.now());
		return done ? { done } : fail(410, { done });
	}
};
