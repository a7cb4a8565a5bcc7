import { errorWords } from '$lib/format/messages/error';
import { wholeList } from '$lib/components/live/bay-poll';
import { instance } from '$lib/server/api/instance';
import { ringOf } from '$lib/server/api/outline';
import { personIdOf } from '$lib/server/auth/reach';
import { listed, outlines } from '$lib/server/store/queries/desk-sites';
import * as looks from '$lib/server/store/queries/desk-looks';
import { error } from '@sveltejs/kit';
import type { PageServerLoad } from './$types';

/** Under this the person has not been away. */
const AWAY_MS = 600_000;

/** Outlines, zones and the states of this moment; from then on the page polls the API itself. */
export const load: PageServerLoad = async ({ locals, params, depends, fetch }) => {
	depends('desk:plan');
	const { reach } = locals;
	const { db } = instance().store;
	const site = (await listed(db, reach?.sites ?? new Set())).find(
		({ slug }) => slug === params.site
	);
	if (reach === null || site === undefined) error(404, errorWords().noSite);
	const [drawn, first] = await Promise.all([outlines(db, site.id), wholeList(site.slug, fetch)]);
	return {
		zones: drawn.zones,
		first: {
			bays: [...first.book.bays.values()],
			changes: first.book.changes,
			asOfMs: first.asOfMs
		},
		outlines: drawn.bays.map(({ code, zone, geometry }) => ({
			code,
			zone,
			ring: ringOf(geometry)
		})),
		since: await sinceLast(personIdOf(reach), site.id)
	};
};

async function sinceLast(personId: number | null, siteId: number) {
	if (personId === null) return null;
	const { db } = instance().store;
	const last = await looks.last(db, personId, siteId);
	if (last === null || Date.now() - last.atMs < AWAY_MS) return null;
	return { atMs: last.atMs, ...(await looks.since(db, siteId, last.atMs, last.changeId)) };
}
