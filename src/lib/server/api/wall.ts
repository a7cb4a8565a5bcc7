import type { BayView } from '$lib/schemas/v1/bays';
import * as bays from '$lib/server/store/queries/bays';
import { openRequests } from '$lib/server/store/queries/desk-looks';
import type { SiteRow } from '$lib/server/store/queries/sites';
import { bayView } from './bay-view';
import type { Instance } from './instance';
import { liveView, siteLive } from './live';

/** Protects the wall's screen and the server alike. */
const MOST_BAYS = 20_000;

/**
 * One site as a screen across the room shows it. Personal bays are never among them (product.md,
 * 'Cautions'), and of the others only what is drawn: no node, no evidence, no since but a doubt's.
 */
export async function wallNow(app: Instance, site: SiteRow, nowMs: number) {
	const { db } = app.store;
	const page = { siteId: site.id, personal: false, afterId: 0, limit: MOST_BAYS };
	const [rows, closed, requests, live] = await Promise.all([
		bays.page(db, page),
		bays.closedAt(db, site.id, nowMs),
		openRequests(db, site.id),
		siteLive(app, site, nowMs)
	]);
	const shown = new Set(rows.map(({ code }) => code));
	return {
		slug: site.slug,
		changes: site.lastChange,
		live: liveView(live),
		bays: rows.map((row): BayView => {
			const {
				state,
				doubt,
				condition,
				also,
				lastKnown,
				closed: shut
			} = bayView(row, closed.get(row.id));
			const bare = { since: null, confidence: null, node: null };
			return {
				...bare,
				...{
					code: row.code,
					zone: row.zone,
					state,
					doubt,
					condition,
					also,
					lastKnown,
					closed: shut
				}
			};
		}),
		/** Initials of who has it, by bay. */
		holders: Object.fromEntries(
			requests.flatMap(({ bay, takerInitials }) =>
				takerInitials !== null && shown.has(bay) ? [[bay, takerInitials]] : []
			)
		)
	};
}
export type WallNow = Awaited<ReturnType<typeof wallNow>>;
