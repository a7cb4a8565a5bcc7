import { errorWords } from '$lib/format/messages/error';
import { error, type RequestEvent } from '@sveltejs/kit';
import { instance } from '$lib/server/api/instance';
import { POLICIES } from '$lib/server/api/rate-limit';
import type { SiteRow } from '$lib/server/store/queries/sites';
import * as links from '$lib/server/store/queries/wall-links';
import { clientAddress } from './authjs';
import { hashTicket, looksLikeTicket } from './ticket';

export interface OpenWall {
	turnS: number;
	sites: readonly SiteRow[];
}

/**
 * What a wall link opens: its own sites, for this one view. It is no session and no key, no other route
 * looks at it. Guessing is limited by address; a link not known and one revoked or over look the same.
 */
export async function requireWall(
	event: Pick<RequestEvent, 'getClientAddress'>,
	token: string,
	nowMs: number
): Promise<OpenWall> {
	const app = instance();
	const found = looksLikeTicket(token)
		? await links.opening(app.store.db, hashTicket(token), nowMs)
		: null;
	if (found !== null) return found;
	const verdict = app.limiter.take(clientAddress(event), POLICIES.stranger, nowMs);
	if (!verdict.allowed) error(429, errorWords().attempts);
	error(404, errorWords().noWall);
}

/** Nothing of a link's address is kept or sent on. */
export const WALL_HEADERS = {
	'referrer-policy': 'no-referrer',
	'cache-control': 'no-store',
	'x-robots-tag': 'noindex'
} as const;
