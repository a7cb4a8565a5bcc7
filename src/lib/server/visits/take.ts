import { WALK_STOPS } from '$lib/schemas/visits';
import { centreOf } from '$lib/server/ingest/bay-centre';
import type { Sql } from '$lib/server/store/queries/bulk';
import type { SiteRow } from '$lib/server/store/queries/sites';
import * as requests from '$lib/server/store/queries/visit-requests';
import * as visits from '$lib/server/store/queries/visits';
import { lengthM, walkOrder, type Place } from './walk-order';

export interface Taken {
	visit: number;
	taken: number;
	/** Of those wanted: ended, or somebody else's, by now. */
	left: number;
}

/** Puts requests that nobody has into the person's open walk of the site, in the order of a short walk. */
export async function take(
	sql: Sql,
	wanted: { site: SiteRow; personId: number; ids: readonly number[] },
	nowMs: number
): Promise<Taken | 'nothing' | 'full'> {
	const { site, personId, ids } = wanted;
	const found = await requests.lock(sql, site.id, ids);
	const free: number[] = [];
	for (const { id, endedAtMs, takenBy } of found) {
		const mine = takenBy === personId && (await visits.runningStop(sql, id)) === null;
		if (endedAtMs === null && (takenBy === null || mine)) free.push(id);
	}
	if (free.length === 0) return 'nothing';
	const visit = await visits.ownOpen(sql, site.id, personId, nowMs);
	const before = await visits.stopsOf(sql, visit);
	if (before.length + free.length > WALK_STOPS) return 'full';
	await requests.hold(sql, free, personId, nowMs);
	for (const id of free) await visits.addStop(sql, visit, id);
	await order(sql, site, visit);
	return { visit, taken: free.length, left: ids.length - free.length };
}

/** Hands one request back; what was recorded at its stop stays. */
export async function handBack(sql: Sql, requestId: number, nowMs: number): Promise<void> {
	const stop = await visits.runningStop(sql, requestId);
	await requests.hold(sql, [requestId], null, nowMs);
	if (stop === null) return;
	const end = { outcome: null, note: '', by: null, atMs: nowMs, recordedAtMs: nowMs };
	if (!(await visits.dropBareStop(sql, stop.id))) await visits.endStop(sql, stop.id, end);
	await endIfDone(sql, stop.visitId, nowMs);
}

/** A walk is over with its last stop. */
export async function endIfDone(sql: Sql, visitId: number, nowMs: number): Promise<void> {
	const stops = await visits.stopsOf(sql, visitId);
	if (stops.every(({ endedAtMs }) => endedAtMs !== null)) await visits.endWalk(sql, visitId, nowMs);
}

/** Ends a walk: what was not seen to goes back to the list. */
export async function endWalk(sql: Sql, visitId: number, nowMs: number): Promise<void> {
	for (const stop of await visits.stopsOf(sql, visitId))
		if (stop.endedAtMs === null) await handBack(sql, stop.requestId, nowMs);
	await visits.endWalk(sql, visitId, nowMs);
}

/** Middles of bays, where they are drawn, m from the site's origin. */
export function placesOf(
	site: Pick<SiteRow, 'latDeg' | 'lonDeg'>,
	rows: readonly { geometry: string | null }[]
): (Place | null)[] {
	return rows.map(({ geometry }) =>
		geometry === null ? null : centreOf(geometry, site.latDeg, site.lonDeg)
	);
}

/** Stops seen to keep their place; after them the rest as a short walk, then bays that are not drawn. */
async function order(sql: Sql, site: SiteRow, visitId: number): Promise<void> {
	const stops = await visits.stopsOf(sql, visitId);
	const done = stops.filter(({ endedAtMs }) => endedAtMs !== null);
	const rest = stops.filter(({ endedAtMs }) => endedAtMs === null);
	const rows = await requests.byIds(
		sql,
		rest.map(({ requestId }) => requestId)
	);
	const bays = rest.map(({ requestId }) => rows.find(({ id }) => id === requestId));
	const places = placesOf(
		site,
		bays.map((bay) => ({ geometry: bay?.geometry ?? null }))
	);
	const drawn = rest.flatMap((stop, i) => {
		const place = places[i] ?? null;
		return place === null ? [] : [{ stop, place, code: bays[i]?.bay ?? '' }];
	});
	const undrawn = rest
		.filter((_, i) => (places[i] ?? null) === null)
		.sort((a, b) => a.requestId - b.requestId);
	// By code first, so that the walk depends on the bays alone and not on when they were asked for.
	drawn.sort((a, b) => a.code.localeCompare(b.code, 'en', { numeric: true }));
	const walk = walkOrder(drawn.map(({ place }) => place)).flatMap((i) => drawn[i]?.stop ?? []);
	await visits.setPlaces(
		sql,
		[...done, ...walk, ...undrawn].map(({ id }, i) => ({ id, place: i + 1 }))
	);
}

/** Length of a walk over its drawn stops, m. */
export function walkLengthM(places: readonly (Place | null)[]): number {
	const drawn = places.filter((place) => place !== null);
	return lengthM(
		drawn,
		drawn.map((_, i) => i)
	);
}
