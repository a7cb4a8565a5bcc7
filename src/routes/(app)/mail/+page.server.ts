import { instance } from '$lib/server/api/instance';
import { requireRole } from '$lib/server/auth/page-guard';
import { list } from '$lib/server/outbox/catcher';
import type { PageServerLoad } from './$types';

/** The local mail catcher: what would have been mailed, readable by an admin. */
export const load: PageServerLoad = async ({ locals }) => {
	requireRole(locals, ['admin']);
	const { config } = instance();
	return { mails: await list(config.dataDir), outside: config.smtpUrl !== null, nowMs: Date.now() };
};
