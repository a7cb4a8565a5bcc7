import { errorWords } from '$lib/format/messages/error';
import { instance } from '$lib/server/api/instance';
import { requireRole } from '$lib/server/auth/page-guard';
import { readDrawn } from '$lib/server/outbox/catcher';
import { error } from '@sveltejs/kit';
import type { RequestHandler } from './$types';

/** Only what the mail itself carries: no script, nothing from elsewhere, no form, framed by our own sheet alone. */
const CSP = [
	"default-src 'none'",
	'img-src data:',
	"style-src 'unsafe-inline'",
	"frame-ancestors 'self'",
	'sandbox allow-popups allow-popups-to-escape-sandbox'
].join('; ');

/** A caught mail as its reader's program draws it, for the frame on the sheet. */
export const GET: RequestHandler = async ({ locals, params }) => {
	requireRole(locals, ['admin']);
	const html = await readDrawn(instance().config.dataDir, params.id);
	if (html === null) error(404, errorWords().noMail);
	return new Response(html, {
		headers: {
			...{ 'content-type': 'text/html; charset=utf-8', 'cache-control': 'no-store' },
			...{ 'content-security-policy': CSP, 'x-frame-options': 'SAMEORIGIN' },
			'referrer-policy': 'no-referrer'
		}
	});
};
