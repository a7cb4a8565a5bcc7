import { errorWords } from '$lib/format/messages/error';
import { error, json } from '@sveltejs/kit';
import { instance } from '$lib/server/api/instance';
import { wallNow } from '$lib/server/api/wall';
import { requireWall, WALL_HEADERS } from '$lib/server/auth/wall-link';
import type { RequestHandler } from './$types';

/** One site of a wall link as of now; without its bays while its change log stands at `changes`. */
export const GET: RequestHandler = async (event) => {
	const nowMs = Date.now();
	const wall = await requireWall(event, event.params.token, nowMs);
	const site = wall.sites.find(({ slug }) => slug === event.url.searchParams.get('site'));
	if (site === undefined) error(404, errorWords().noSite);
	const now = await wallNow(instance(), site, nowMs);
	const same = event.url.searchParams.get('changes') === String(now.changes);
	return json(same ? { ...now, bays: null } : now, { headers: WALL_HEADERS });
};
