import { z } from 'zod';
import type { Secret } from '$lib/server/secret';

/** What a link in a mail may do without signing in; nothing but this. */
const content = z.discriminatedUnion('does', [
	z.object({
		does: z.literal('acknowledge'),
		personId: z.number().int(),
		noticeIds: z.array(z.number().int()).min(1),
		expiresAtMs: z.number()
	}),
	// One that ended would leave people who cannot stop the mail.
	z.object({ does: z.literal('unsubscribe'), personId: z.number().int() })
]);
export type MailLink = z.infer<typeof content>;

/** People read mail after a holiday, but what they take should still be what they read of. */
export const ACKNOWLEDGE_DAYS = 14;

/** Sealed (AES-256-GCM): made by this installation, not altered, and tells an onlooker nothing. */
export const makeToken = (secret: Secret, link: MailLink): string =>
	secret.seal('mail link', link.does, Buffer.from(JSON.stringify(link))).toString('base64url');

export type ReadToken =
	{ ok: true; link: MailLink } | { ok: false; reason: 'not_ours' | 'expired' };

export function readToken(
	secret: Secret,
	does: MailLink['does'],
	token: string | null,
	nowMs: number
): ReadToken {
	if (token === null || !/^[\w-]{40,8000}$/.test(token)) return { ok: false, reason: 'not_ours' };
	const opened = secret.open('mail link', does, Buffer.from(token, 'base64url'));
	if (!opened.ok) return { ok: false, reason: 'not_ours' };
	const parsed = content.safeParse(JSON.parse(opened.bytes.toString('utf8')));
	if (!parsed.success) return { ok: false, reason: 'not_ours' };
	const link = parsed.data;
	if (link.does === 'acknowledge' && link.expiresAtMs < nowMs)
		return { ok: false, reason: 'expired' };
	return { ok: true, link };
}
