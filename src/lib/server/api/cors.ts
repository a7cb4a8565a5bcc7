/** Cross-origin reading by key (api.md, 'Conventions'); never with credentials. */
const METHODS = 'GET, HEAD, POST, PATCH, DELETE';
const ALLOWED_HEADERS = 'Authorization, Content-Type, Accept, Idempotency-Key, If-None-Match';
const EXPOSED = 'ETag, Site-As-Of, RateLimit, RateLimit-Policy, Retry-After, Location';

/** A preflight names no key, so it is answered for the union of all keys' origins. */
export function preflight(origin: string | null, union: ReadonlySet<string>): Response {
	const allowed = origin !== null && union.has(origin);
	return new Response(null, {
		status: 204,
		headers: {
			vary: 'Origin',
			allow: `${METHODS}, OPTIONS`,
			...(allowed
				? {
						'access-control-allow-origin': origin,
						'access-control-allow-methods': METHODS,
						'access-control-allow-headers': ALLOWED_HEADERS,
						'access-control-max-age': '600'
					}
				: {})
		}
	});
}

export const corsFields = (origin: string): Record<string, string> => ({
	'access-control-allow-origin': origin,
	'access-control-expose-headers': EXPOSED,
	'cross-origin-resource-policy': 'cross-origin'
});
