import { errorWords } from '$lib/format/messages/error';
import { instance } from '$lib/server/api/instance';
import { requireRole } from '$lib/server/auth/page-guard';
import { read } from '$lib/server/outbox/catcher';
import { error } from '@sveltejs/kit';
import type { PageServerLoad } from './$types';

export const load: PageServerLoad = async ({ locals, params, setHeaders }) => {
	requireRole(locals, ['admin']);
	setHeaders({ 'cache-control': 'no-store' });
	const mail = await read(instance().config.dataDir, params.id);
	if (mail === null) error(404, errorWords().noMail);
	return { mail };
};
