/** Own pages of sign-in and passwords, drawn under routes/(public). */
export const PATHS = {
	signIn: '/sign-in',
	signOut: '/sign-out',
	/** ?ticket= of the mail. */
	invitation: '/invitation',
	/** Without ?ticket= it asks for the address, with it for the new password. */
	reset: '/reset',
	/** Where a generated password must be changed. */
	password: '/password'
} as const;

/** Where one may go after signing in: a path of our own, nothing that a browser reads as another host. */
export function safeReturn(to: string | null): string {
	if (to === null || !/^\/(?![/\\])/.test(to) || /[\u0000-\u001f\\]/.test(to)) return '/';
	const url = new URL(to, 'http://here.invalid');
	if (url.origin !== 'http://here.invalid' || url.pathname.startsWith('/auth/')) return '/';
	return url.pathname + url.search + url.hash;
}
