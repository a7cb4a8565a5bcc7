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

const HERE = 'http://here.invalid';

/** Where one may go after signing in: a path of our own, nothing that a browser reads as another host. */
export function safeReturn(to: string | null): string {
	if (to === null || !to.startsWith('/') || to.includes('\\') || to.startsWith('//')) return '/';
	// The parser drops tabs and newlines, so what it makes of the text is what is judged and used.
	if (!URL.canParse(to, HERE)) return '/';
	const url = new URL(to, HERE);
	if (url.origin !== HERE || url.pathname.startsWith('//')) return '/';
	if (url.pathname.startsWith('/auth/')) return '/';
	return url.pathname + url.search + url.hash;
}
