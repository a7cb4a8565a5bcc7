import type { RequestEvent } from '@sveltejs/kit';
import { instance, type Instance } from '$lib/server/api/instance';
import { enqueueMail } from '$lib/server/outbox/enqueue';
import * as people from '$lib/server/store/queries/people';
import * as tickets from '$lib/server/store/queries/tickets';
import { clientAddress } from './authjs';
import { linkOrigin } from './link-origin';
import { PATHS } from './paths';
import { newTicket } from './ticket';
import type { Policy } from '$lib/server/api/rate-limit';

const RESET_MS = 3_600_000;
/** Mails that one address may cause, and that one person may get, in an hour. */
const PER_ADDRESS: Policy = { name: 'reset-address', requests: 10, windowS: 3600 };
const PER_PERSON: Policy = { name: 'reset-person', requests: 3, windowS: 3600 };

/**
 * For the form action of /reset: mails a one-time link when there is such a person. The answer is the
 * same either way, so that nobody learns who has an account.
 */
export async function askReset(
	event: Pick<RequestEvent, 'getClientAddress'>,
	form: { email: string }
): Promise<void> {
	const app = instance();
	const nowMs = Date.now();
	const email = people.emailKey(form.email);
	if (!app.limiter.take(clientAddress(event), PER_ADDRESS, nowMs).allowed) return;
	if (!app.limiter.take(email, PER_PERSON, nowMs).allowed) return;
	// Not awaited: the time of the answer does not tell either.
	void mailReset(app, email, linkOrigin(app), nowMs).catch(() => {
		app.log.warn('a reset could not be mailed: the database is away');
	});
}

async function mailReset(
	app: Instance,
	email: string,
	origin: string,
	nowMs: number
): Promise<void> {
	const person = await people.byEmail(app.store.db, email);
	if (person === null || person.switchedOffAtMs !== null) return;
	const { text: secret, hash } = newTicket();
	const expiresAtMs = nowMs + RESET_MS;
	const text = [
		`${person.name},`,
		'',
		'somebody asked for a new Lodekeep password for this address. Choose one here:',
		'',
		`${origin}${PATHS.reset}?ticket=${secret}`,
		'',
		'The link works once, for one hour. If it was not you, nothing changes.'
	].join('\n');
	await app.store.db.transaction(async (tx) => {
		await tickets.create(tx, { hash, personId: person.id, purpose: 'reset', expiresAtMs }, nowMs);
		await enqueueMail(
			tx,
			app.secret,
			{ to: person.email, subject: 'A new Lodekeep password', text, demo: person.demo },
			nowMs
		);
	});
	app.sender.wake();
}
