import type { RequestEvent } from '@sveltejs/kit';
import { instance } from '$lib/server/api/instance';
import * as audit from '$lib/server/store/queries/audit';
import * as people from '$lib/server/store/queries/people';
import { clientAddress } from './authjs';
import { checkPassword, hashPassword, passwordProblem } from './password';
import { personIdOf } from './reach';
import { startSession } from './sign-in';

export type PasswordChanged =
	| { ok: true }
	| { ok: false; reason: 'signed_out' | 'wrong' | 'same' }
	| { ok: false; reason: 'throttled'; retryAfterS: number }
	| { ok: false; reason: 'password'; why: string };

type Event = Pick<RequestEvent, 'cookies' | 'getClientAddress' | 'url' | 'locals'>;

/** For the form action of /password. Every other session of the person ends. */
export async function changePassword(
	event: Event,
	form: { current: string; password: string }
): Promise<PasswordChanged> {
	const app = instance();
	const id = event.locals.reach === null ? null : personIdOf(event.locals.reach);
	const person = id === null ? null : await people.byId(app.store.db, id);
	if (person === null) return { ok: false, reason: 'signed_out' };
	// A session left open on somebody's screen is no licence to guess the password.
	const attempt = {
		email: `change ${person.email}`,
		address: clientAddress(event),
		deviceId: null
	};
	const admission = app.throttle.admit(attempt, Date.now());
	if (!admission.ok) {
		return { ok: false, reason: 'throttled', retryAfterS: admission.retryAfterS };
	}
	if (!(await checkPassword(person.passwordHash, form.current))) {
		return { ok: false, reason: 'wrong' };
	}
	app.throttle.succeeded(attempt);
	const why = passwordProblem(form.password, person);
	if (why !== null) return { ok: false, reason: 'password', why };
	if (form.password === form.current) return { ok: false, reason: 'same' };
	const passwordHash = await hashPassword(form.password);
	await app.store.db.transaction(async (tx) => {
		await people.setPassword(tx, person.id, passwordHash);
		await audit.note(
			tx,
			{ actor: `person:${person.id}`, what: 'password.changed', subject: person.email },
			Date.now()
		);
	});
	app.directory.invalidate();
	await startSession(app, event, person.id);
	return { ok: true };
}
