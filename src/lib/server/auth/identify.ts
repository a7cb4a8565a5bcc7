import type { Cookies } from '@sveltejs/kit';
import type { Instance } from '$lib/server/api/instance';
import { bearerOf } from './api-key';
import type { KeyFound } from './directory';
import type { Reach } from './reach';
import type { Session } from './session';

export interface Caller {
	reach: Reach | null;
	/** Of a good key. */
	key: KeyFound | null;
	/** Of a good session. */
	session: Session | null;
	/** A key or session was sent and is not good (any more). */
	refused: boolean;
}

export const NOBODY: Caller = { reach: null, key: null, session: null, refused: false };

/** A request with `Authorization` to the API is a program's: its cookies are not looked at. */
export const isProgram = (pathname: string, authorization: string | null): boolean =>
	authorization !== null && pathname.startsWith('/api/v1');

export async function identify(
	app: Instance,
	request: { pathname: string; authorization: string | null; cookies: Pick<Cookies, 'get'> },
	nowMs: number
): Promise<Caller> {
	if (isProgram(request.pathname, request.authorization)) {
		const token = bearerOf(request.authorization);
		const key = token === null ? null : (await app.directory.get()).key(token, nowMs);
		return { reach: key?.reach ?? null, key, session: null, refused: key === null };
	}
	const cookie = request.cookies.get(app.sessions.cookieName);
	if (cookie === undefined || cookie === '') return NOBODY;
	const session = await app.sessions.read(cookie, nowMs);
	if (session === null) return { ...NOBODY, refused: true };
	const reach = (await app.directory.get()).person(session.personId, session.version);
	return { reach, key: null, session: reach === null ? null : session, refused: reach === null };
}
