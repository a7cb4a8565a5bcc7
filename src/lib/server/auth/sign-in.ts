import { Auth, raw } from '@auth/core';
import { AuthError } from '@auth/core/errors';
import { error as refuse, type RequestEvent } from '@sveltejs/kit';
import { isLanguage } from '$lib/format/messages';
import { isDatabaseAway } from '$lib/server/api/database-away';
import { instance, type Instance } from '$lib/server/api/instance';
import * as people from '$lib/server/store/queries/people';
import { authConfig, noOutcome } from './authjs';
import { setLanguage } from './language';
import { safeReturn } from './paths';
import { cookieOptions, DEVICE_MAX_AGE_S, deviceCookieName, SESSION_MAX_AGE_S } from './session';

export type SignedIn =
	| { ok: true; to: string; mustChangePassword: boolean }
	| { ok: false; reason: 'wrong' }
	| { ok: false; reason: 'throttled'; retryAfterS: number };

type Event = Pick<RequestEvent, 'cookies' | 'getClientAddress' | 'url'>;

/** For the form action of /sign-in. Sets the session's cookie; `to` is where to go next. */
export async function signIn(
	event: Event,
	form: { email: string; password: string; to: string | null }
): Promise<SignedIn> {
	const app = instance();
	const outcome = noOutcome();
	const request = new Request(new URL('/auth/callback/credentials', event.url.origin), {
		method: 'POST',
		headers: { 'content-type': 'application/x-www-form-urlencoded' },
		body: new URLSearchParams({ email: form.email, password: form.password, callbackUrl: '/' })
	});
	try {
		const answer = await Auth(request, { ...authConfig(app, event, outcome), raw });
		for (const cookie of answer.cookies ?? []) {
			// The callback-url cookie of Auth.js is of no use to us.
			if (!cookie.name.startsWith(app.sessions.cookieName)) continue;
			event.cookies.set(cookie.name, cookie.value, {
				...cookieOptions(app.secureCookies),
				maxAge: SESSION_MAX_AGE_S
			});
		}
	} catch (error) {
		if (isDatabaseAway(outcome.broken)) refuse(503, 'The database is away. Try again.');
		if (outcome.broken !== null || !(error instanceof AuthError)) throw error;
	}
	if (outcome.retryAfterS !== null) {
		return { ok: false, reason: 'throttled', retryAfterS: outcome.retryAfterS };
	}
	const person =
		outcome.personId === null ? null : await people.byId(app.store.db, outcome.personId);
	if (person === null) return { ok: false, reason: 'wrong' };
	// The new session may carry a version that the directory in memory has not read yet.
	app.directory.invalidate();
	rememberDevice(app, event, person.id);
	if (isLanguage(person.language)) setLanguage(event.cookies, person.language, app.secureCookies);
	return { ok: true, to: safeReturn(form.to), mustChangePassword: person.mustChangePassword };
}

/** A session for a person whose password was just set (invitation, reset, change). */
export async function startSession(app: Instance, event: Event, personId: number): Promise<void> {
	const person = await people.byId(app.store.db, personId);
	if (person === null) return;
	event.cookies.set(
		app.sessions.cookieName,
		await app.sessions.issue(person.id, person.sessionVersion),
		{ ...cookieOptions(app.secureCookies), maxAge: SESSION_MAX_AGE_S }
	);
	rememberDevice(app, event, person.id);
}

function rememberDevice(app: Instance, event: Event, personId: number): void {
	event.cookies.set(deviceCookieName(app.secureCookies), app.devices.issue(personId), {
		...cookieOptions(app.secureCookies),
		maxAge: DEVICE_MAX_AGE_S
	});
}
