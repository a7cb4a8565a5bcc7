/** Cross-site request forgery: any unsafe method that a browser could send for somebody (RFC 9110, 9.2.1). */
const SAFE = new Set(['GET', 'HEAD', 'OPTIONS', 'TRACE']);

/**
 * Mail programs post here without cookie or Origin (RFC 8058), some from a page of their own. What it does
 * hangs on the sealed token in its address alone, a session is not looked at: nothing to forge.
 */
export const isOneClick = (pathname: string): boolean => pathname === '/unsubscribe';

/**
 * true = refuse. With a session cookie an Origin that is ours must stand there, whatever the content
 * type; without one a foreign Origin is refused all the same (signing somebody in as somebody else).
 */
export function forgedRequest(r: {
	method: string;
	origin: string | null;
	ours: string;
	hasSession: boolean;
	/** Bearer to /api/v1: a program, its cookies are not looked at. */
	program: boolean;
}): boolean {
	if (SAFE.has(r.method) || r.program) return false;
	return r.origin === null ? r.hasSession : r.origin !== r.ours;
}
