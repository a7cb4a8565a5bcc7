import type { RequestEvent } from '@sveltejs/kit';
import { instance } from '$lib/server/api/instance';
import { cookieOptions } from './session';

/** For the form action of /sign-out: the cookie goes, and what the browser kept of this site with it. */
export function signOut(event: Pick<RequestEvent, 'cookies' | 'setHeaders'>): void {
	const app = instance();
	event.cookies.delete(app.sessions.cookieName, cookieOptions(app.secureCookies));
	event.setHeaders({ 'clear-site-data': '"cache"' });
}
