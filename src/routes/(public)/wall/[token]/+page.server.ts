import { ringOf } from '$lib/server/api/outline';
import { instance } from '$lib/server/api/instance';
import { wallNow } from '$lib/server/api/wall';
import { requireWall, WALL_HEADERS } from '$lib/server/auth/wall-link';
import { outlines } from '$lib/server/store/queries/desk-sites';
import type { PageServerLoad } from './$types';

/** The sites of a wall link: outlines without personal bays, and the states of this moment. */
export const load: PageServerLoad = async (event) => {
	event.setHeaders(WALL_HEADERS);
	event.depends('wall:sites');
	const nowMs = Date.now();
	const wall = await requireWall(event, event.params.token, nowMs);
	const app = instance();
	const sites = await Promise.all(
		wall.sites.map(async (site) => {
			const [drawn, now] = await Promise.all([
				outlines(app.store.db, site.id),
				wallNow(app, site, nowMs)
			]);
			const { slug, name, timezone, demo } = site;
			return {
				...{ slug, name, timezone, demo, now },
				zones: drawn.zones,
				outlines: drawn.bays
					.filter(({ personal }) => !personal)
					.map(({ code, zone, geometry }) => ({ code, zone, ring: ringOf(geometry) }))
			};
		})
	);
	return { turnS: wall.turnS, sites };
};
