import { instance } from '$lib/server/api/instance';
import { requireRole } from '$lib/server/auth/page-guard';
import { list } from '$lib/server/outbox/catcher';
import { troubles } from '$lib/server/store/queries/outbox';
import type { PageServerLoad } from './$types';

/** Of those not sent, the newest. */
const WAITING = 200;

/** What waits or came back with what the mail server said; and the local mail catcher: what would have been mailed, readable by an admin. */
export const load: PageServerLoad = async ({ locals }) => {
	requireRole(locals, ['admin']);
	const { config, store } = instance();
	const [mails, waiting] = await Promise.all([list(config.dataDir), troubles(store.db, WAITING)]);
	return { mails, waiting, outside: config.smtpUrl !== null, nowMs: Date.now() };
};
