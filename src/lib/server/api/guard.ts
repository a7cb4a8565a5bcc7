import type { RequestEvent } from '@sveltejs/kit';
import type { Caller } from '$lib/server/auth/identify';
import { PATHS } from '$lib/server/auth/paths';
import { RENEW_AFTER_S } from '$lib/server/auth/session';

/** Pages behind sign-in. */
const isBehindSignIn = (routeId: string | null): boolean => routeId?.startsWith('/(app)') ?? false;

/** Where a request for a page must go first; null = it may go on. */
export function detour(event: RequestEvent, caller: Caller): string | null {
	if (!isBehindSignIn(event.route.id)) return null;
	if (caller.reach === null) {
		const to = event.url.pathname + event.url.search;
		return `${PATHS.signIn}?to=${encodeURIComponent(to)}`;
	}
	return caller.reach.mustChangePassword ? PATHS.password : null;
}

/** A session in use is renewed on a page load, once a day; polling sets no cookie. */
export function dueForRenewal(event: RequestEvent, caller: Caller, nowMs: number): boolean {
	return (
		caller.session !== null &&
		event.request.method === 'GET' &&
		isBehindSignIn(event.route.id) &&
		nowMs / 1000 - caller.session.issuedAtS > RENEW_AFTER_S
	);
}

/**
 * People type localhost, cookies and Origin belong to ORIGIN: pages are sent there. Programs and
 * probes are answered where they ask.
 */
export function canonical(event: RequestEvent, origin: string | null): string | null {
	if (origin === null || !['GET', 'HEAD'].includes(event.request.method)) return null;
	const host = event.request.headers.get('host')?.toLowerCase() ?? '';
	if (!/^localhost(:\d+)?$/.test(host) || new URL(origin).host === host) return null;
	const { pathname, search } = event.url;
	return /^\/(api|healthz|readyz|metrics)(\/|$)/.test(pathname) ? null : origin + pathname + search;
}
