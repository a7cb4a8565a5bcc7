import type { Role } from '$lib/schemas/roles';
import { loadListOf, type VisitCause } from '$lib/schemas/visit-kinds';
import type { CauseView, StopView, WalkOutline, WalkView } from '$lib/schemas/visit-view';
import { ringOf } from '$lib/server/api/outline';
import { personIdOf, type Reach } from '$lib/server/auth/reach';
import type { Store } from '$lib/server/store/connect';
import { list as listPeople } from '$lib/server/store/queries/people';
import { select } from '$lib/server/store/queries/bulk';
import type { SiteRow } from '$lib/server/store/queries/sites';
import * as records from '$lib/server/store/queries/visit-records';
import * as requests from '$lib/server/store/queries/visit-requests';
import * as visits from '$lib/server/store/queries/visits';
import { accessView } from './access';
import { namesOf } from './names';
import { VISIT_PARAMS } from './params';
import { placesOf, walkLengthM } from './take';

export type Asker = Reach & { role: Role };

/** One walk with all that is needed in the street; null when it is not there. */
export async function walkView(
	store: Store,
	{ site, reach, visitId }: { site: SiteRow; reach: Asker; visitId: number },
	nowMs: number
): Promise<WalkView | null> {
	const sql = store.pool;
	const walk = await visits.byId(sql, site.id, visitId);
	if (walk === null) return null;
	const stops = await visits.stopsOf(sql, walk.id);
	const ids = stops.map(({ requestId }) => requestId);
	const rows = new Map((await requests.byIds(sql, ids)).map((row) => [row.id, row]));
	const people = new Map((await listPeople(store.db)).map(({ id, name }) => [id, name]));
	const named = namesOf(reach, people, nowMs);
	const kept = await keptOf(store, stops, ids);
	const views = stops.flatMap((stop) => {
		const row = rows.get(stop.requestId);
		return row === undefined ? [] : [stopView(stop, row, kept, { named, me: personIdOf(reach) })];
	});
	const bays = stops.map(({ requestId }) => ({
		geometry: rows.get(requestId)?.geometry ?? null
	}));
	return {
		id: walk.id,
		site: { slug: site.slug, name: site.name, timezone: site.timezone, demo: site.demo },
		...{ takenAtMs: walk.takenAtMs, endedAtMs: walk.endedAtMs },
		mine: walk.takenBy !== null && walk.takenBy === personIdOf(reach),
		by: walk.endedAtMs === null ? walk.takerName : named(walk.takenBy, walk.endedAtMs),
		stops: views,
		lengthM: walkLengthM(placesOf(site, bays)),
		load: loadListOf(
			views
				.filter(({ endedAtMs }) => endedAtMs === null)
				.map(({ causes, profile }) => ({ causes: causesThatHold(causes), profile }))
		),
		access: await accessView(sql, site, reach.role, nowMs),
		outlines: await outlinesOf(store, site.id, new Set(views.map(({ bay }) => bay))),
		asOfMs: nowMs
	};
}

/** What the stop is for; where all of it has ended by itself, what it was for. */
export function causesThatHold(causes: readonly CauseView[]): VisitCause[] {
	const now = causes.filter(({ endedAtMs }) => endedAtMs === null);
	return [...new Set((now.length > 0 ? now : causes).map(({ cause }) => cause))];
}

interface Kept {
	causes: requests.CauseRow[];
	recordings: records.RecordingRow[];
	photos: records.PhotoRow[];
}

async function keptOf(
	{ pool }: Store,
	stops: readonly visits.StopRow[],
	requestIds: readonly number[]
): Promise<Kept> {
	const stopIds = stops.map(({ id }) => id);
	return {
		causes: await requests.causesOf(pool, requestIds),
		recordings: await records.ofStops(pool, stopIds),
		photos: await records.photosOf(pool, stopIds)
	};
}

/** Causes as they are shown; a request of before causes were kept shows its reason. */
export function causeViews(
	row: Pick<requests.RequestRow, 'id' | 'reason' | 'askedAtMs'>,
	all: readonly requests.CauseRow[]
): CauseView[] {
	const own = all.filter(({ requestId }) => requestId === row.id);
	if (own.length === 0)
		return [{ cause: 'by_hand', detail: row.reason, atMs: row.askedAtMs, endedAtMs: null }];
	return own.map(({ cause, detail, atMs, endedAtMs }) => ({ cause, detail, atMs, endedAtMs }));
}

interface Reader {
	named: ReturnType<typeof namesOf>;
	me: number | null;
}

function stopView(
	stop: visits.StopRow,
	row: requests.RequestRow,
	kept: Kept,
	{ named, me }: Reader
): StopView {
	const own = kept.recordings.filter(({ stopId }) => stopId === stop.id);
	const taken = own.filter(({ added }) => added === 0);
	const last = (kind: 'tick' | 'part') =>
		taken.filter((r) => r.kind === kind).map(({ code, amount }) => [code, amount] as const);
	return {
		...{ id: stop.id, request: row.id, place: stop.place, bay: row.bay, zone: row.zone },
		...{ serial: row.serial, profile: row.profile, causes: causeViews(row, kept.causes) },
		ticks: Object.fromEntries(last('tick').map(([code, amount]) => [code, amount === 1])),
		parts: Object.fromEntries(last('part')),
		notes: taken
			.filter(({ kind }) => kind === 'note')
			.map(({ id, text, madeAtMs, personId }) => ({
				...{ id, text, madeAtMs, by: named(personId, madeAtMs) }
			})),
		...{ outcome: stop.outcome, outcomeNote: stop.note, endedAtMs: stop.endedAtMs },
		endedBy: stop.endedAtMs === null ? null : named(stop.endedBy, stop.endedAtMs),
		photos: kept.photos
			.filter(({ stopId }) => stopId === stop.id)
			.map(({ id, madeAtMs, personId, added }) => ({
				...{ id, madeAtMs, mine: personId !== null && personId === me, added: added === 1 }
			})),
		additions: own
			.filter(({ added }) => added === 1)
			.map(({ id, kind, code, amount, text, madeAtMs, personId }) => ({
				...{ id, kind, code, amount, text, madeAtMs, by: named(personId, madeAtMs) }
			}))
	};
}

/** Outlines of the site around the walk, those of its own bays for sure. */
async function outlinesOf(
	store: Store,
	siteId: number,
	own: ReadonlySet<string>
): Promise<WalkOutline[]> {
	const rows = await select<{ code: string; zone: string; geometry: string | null }>(
		store.pool,
		`SELECT b.code, z.code AS zone, b.geometry FROM bay b JOIN zone z ON z.id = b.zone_id
		 WHERE b.site_id = ? AND b.removed_at_ms = 0 AND b.geometry IS NOT NULL ORDER BY b.id`,
		[siteId]
	);
	const zones = new Set(rows.filter(({ code }) => own.has(code)).map(({ zone }) => zone));
	const near = (zone: string) => rows.length <= VISIT_PARAMS.outlines || zones.has(zone);
	const around = rows.filter(({ code, zone }) => !own.has(code) && near(zone));
	return [...rows.filter(({ code }) => own.has(code)), ...around]
		.slice(0, VISIT_PARAMS.outlines)
		.map(({ code, zone, geometry }) => ({ code, zone, ring: ringOf(geometry) }));
}
