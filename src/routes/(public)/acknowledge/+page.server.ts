import { instance } from '$lib/server/api/instance';
import { acknowledge, acknowledgeView } from '$lib/server/notices/mail-links';
import { fail } from '@sveltejs/kit';
import type { Actions, PageServerLoad } from './$types';

/** Reading changes nothing: mail programs open links by themselves. */
export const load: PageServerLoad = async ({ url, setHeaders }) => {
	setHeaders({ 'referrer-policy': 'no-referrer', 'cache-control': 'no-store' });
	return await acknowledgeView(instance(), url.searchParams.get('token'), Date.now());
};

export const actions: Actions = {
	default: async ({ request }) => {
		const token = (await request.formData()).get('token');
		const done = await acknowledge(
			instance(),
			typeof token === 'string' ? token : null,
			Date.now()
		);
		return done.ok ? done : fail(410, done);
	}
};
