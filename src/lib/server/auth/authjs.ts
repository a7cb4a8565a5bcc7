import { skipCSRFCheck, type AuthConfig } from '@auth/core';
import { CredentialsSignin } from '@auth/core/errors';
import Credentials from '@auth/core/providers/credentials';
import type { RequestEvent } from '@sveltejs/kit';
import { z } from 'zod';
import type { Instance } from '$lib/server/api/instance';
import { byEmail, emailKey } from '$lib/server/store/queries/people';
import { PATHS } from './paths';
import { checkPassword, passwordsBusy } from './password';
import { cookieOptions, deviceCookieName, SESSION_MAX_AGE_S } from './session';

const credentials = z.object({ email: z.string().max(254), password: z.string().max(1000) });

/** What came of one attempt, for the page that asked. */
export interface Outcome {
	personId: number | null;
	retryAfterS: number | null;
	/** What broke while it was tried; no word on the password. */
	broken: unknown;
}

export const noOutcome = (): Outcome => ({ personId: null, retryAfterS: null, broken: null });

const BUSY_RETRY_S = 5;

class Throttled extends CredentialsSignin {
	override code = 'throttled';
}

type Event = Pick<RequestEvent, 'getClientAddress' | 'cookies' | 'url'>;

/** Behind a proxy that left its header out there is no address: such requests share one count. */
export function clientAddress(event: Pick<RequestEvent, 'getClientAddress'>): string {
	try {
		return event.getClientAddress();
	} catch {
		return 'unknown';
	}
}

/** Throttling sits here because Auth.js' callback route reaches it directly. */
async function authorize(
	app: Instance,
	event: Event,
	given: unknown,
	outcome: Outcome
): Promise<{ id: string; version: number } | null> {
	const parsed = credentials.safeParse(given);
	if (!parsed.success) return null;
	if (passwordsBusy()) {
		outcome.retryAfterS = BUSY_RETRY_S;
		throw new Throttled();
	}
	const email = emailKey(parsed.data.email);
	const person = await byEmail(app.store.db, email);
	const cookie = event.cookies.get(deviceCookieName(app.secureCookies));
	const deviceId = person === null ? null : app.devices.idFor(cookie, person.id);
	const attempt = { email, address: clientAddress(event), deviceId };
	const admission = app.throttle.admit(attempt, Date.now());
	if (!admission.ok) {
		outcome.retryAfterS = admission.retryAfterS;
		throw new Throttled();
	}
	const living = person !== null && person.switchedOffAtMs === null ? person : null;
	const right = await checkPassword(living?.passwordHash ?? null, parsed.data.password);
	if (!right || living === null) return null;
	app.throttle.succeeded(attempt);
	outcome.personId = living.id;
	return { id: String(living.id), version: living.sessionVersion };
}

const withVersion = z.object({ id: z.string(), version: z.int() });

/** Auth.js for one request: credentials only, JWT with the session's version, own pages. */
export function authConfig(
	app: Instance,
	event: Event,
	outcome: Outcome = noOutcome()
): AuthConfig {
	return {
		basePath: '/auth',
		trustHost: true,
		// hooks.server.ts has checked Origin before this runs.
		skipCSRFCheck,
		secret: [...app.sessions.secrets],
		session: { strategy: 'jwt', maxAge: SESSION_MAX_AGE_S },
		useSecureCookies: app.secureCookies,
		cookies: {
			sessionToken: {
				name: app.sessions.cookieName,
				options: cookieOptions(app.secureCookies)
			}
		},
		pages: { signIn: PATHS.signIn, signOut: PATHS.signOut, error: PATHS.signIn },
		providers: [
			Credentials({
				credentials: { email: {}, password: {} },
				authorize: async (given) => {
					try {
						return await authorize(app, event, given, outcome);
					} catch (error) {
						// Auth.js wraps whatever is thrown here: the page needs to know what it was.
						if (!(error instanceof CredentialsSignin)) outcome.broken = error;
						throw error;
					}
				}
			})
		],
		callbacks: {
			jwt: ({ token, user }) => {
				const fresh = withVersion.safeParse(user);
				return fresh.success ? { sub: fresh.data.id, ver: fresh.data.version } : token;
			}
		},
		logger: {
			error: (error) => {
				if (!(error instanceof CredentialsSignin)) {
					app.log.error({ reason: error.name }, 'sign-in failed');
				}
			},
			warn: () => undefined,
			debug: () => undefined
		}
	};
}
