/** Security headers of every answer that goes through hooks; Kit adds the pages' CSP with nonces. */
const ALWAYS = {
	'x-content-type-options': 'nosniff',
	'referrer-policy': 'same-origin',
	'x-frame-options': 'DENY',
	'cross-origin-opener-policy': 'same-origin',
	'cross-origin-resource-policy': 'same-origin',
	'permissions-policy': 'camera=(self), geolocation=(self), microphone=(), payment=(), usb=()'
} as const;

export function secure(response: Response, o: { isApi: boolean; https: boolean }): void {
	const { headers } = response;
	// What an answer says of itself stands (a page with a one-time link sends no referrer at all).
	for (const [name, value] of Object.entries(ALWAYS)) {
		if (!headers.has(name)) headers.set(name, value);
	}
	if (o.https) headers.set('strict-transport-security', 'max-age=31536000');
	if (o.isApi) headers.set('content-security-policy', "default-src 'none'; frame-ancestors 'none'");
	const isPage = headers.get('content-type')?.startsWith('text/html') === true;
	if (isPage && !headers.has('cache-control')) headers.set('cache-control', 'private, no-cache');
}

/** A copy whose headers can be set: those of fetched and redirect answers are frozen. */
export const mutable = (response: Response): Response =>
	new Response(response.body, {
		status: response.status,
		statusText: response.statusText,
		headers: new Headers(response.headers)
	});
