import type { NodeEvent } from './film';
import { plantNodes } from './grounds';
import type { Life } from './schedule';
import { layRow, type RowSpec, type SitePlan } from './site-plan';

/**
 * The demo's site: invented through and through. Its position lies in the open North Sea, so that no
 * real place is meant; the names are our own.
 */
const TURN_DEG = 12;
const RADIANS = Math.PI / 180;
const PROFILE = 'amr-18-16384';

/** A row given in the yard's own axes, turned into the world's. */
function turned(spec: RowSpec): RowSpec {
	const [s, c] = [Math.sin(TURN_DEG * RADIANS), Math.cos(TURN_DEG * RADIANS)];
	return {
		...spec,
		eastM: spec.eastM * c + spec.northM * s,
		northM: spec.northM * c - spec.eastM * s,
		alongDeg: (spec.alongDeg + TURN_DEG) % 360,
		noseDeg: (spec.noseDeg + TURN_DEG) % 360
	};
}

const ROWS: readonly RowSpec[] = [
	// Court: two rows facing each other over one aisle.
	{
		zone: 'court',
		row: 'court-south',
		prefix: 'C',
		first: 1,
		count: 8,
		eastM: 0,
		northM: 0,
		alongDeg: 90,
		noseDeg: 180
	},
	{
		zone: 'court',
		row: 'court-north',
		prefix: 'C',
		first: 11,
		count: 8,
		eastM: 0,
		northM: 10.2,
		alongDeg: 90,
		noseDeg: 0
	},
	// Quay: slanted bays along a one-way aisle.
	{
		zone: 'quay',
		row: 'quay',
		prefix: 'Q',
		first: 1,
		count: 12,
		eastM: -4,
		northM: 27,
		alongDeg: 90,
		noseDeg: 30
	},
	// Lane: kerb bays, end to end, on both sides of a street.
	{
		zone: 'lane',
		row: 'lane-east',
		prefix: 'L',
		first: 1,
		count: 6,
		eastM: 46,
		northM: -4,
		alongDeg: 0,
		noseDeg: 0,
		widthM: 2.2,
		lengthM: 5.5
	},
	{
		zone: 'lane',
		row: 'lane-west',
		prefix: 'L',
		first: 11,
		count: 6,
		eastM: 38,
		northM: 33.2,
		alongDeg: 180,
		noseDeg: 180,
		widthM: 2.2,
		lengthM: 5.5
	}
];

export function demoPlan(seed: number): SitePlan {
	const rows = ROWS.map((spec) => layRow(turned(spec)));
	const bays = rows.flatMap((row) => row.bays);
	return {
		slug: 'marrowfen-yard',
		name: 'Marrowfen Yard',
		latDeg: 55.3142,
		lonDeg: 4.2071,
		altitudeM: 4,
		timezone: 'Etc/GMT-1',
		bays,
		nodes: plantNodes(bays, 'MY', PROFILE, seed),
		lanes: rows.map((row) => row.lane)
	};
}

const MINUTE_S = 60;
const HOUR_S = 3600;
export const LOCAL_OFFSET_MS = 3_600_000;
/** Times as long a gap is at night as by day, hour by hour. */
const DAY_RHYTHM = [
	9, 10, 10, 10, 8, 5, 2, 0.8, 0.5, 0.6, 0.8, 0.8, 0.6, 0.7, 0.9, 0.9, 0.8, 0.7, 0.8, 1.2, 2, 3, 5,
	7
];
/** Residents: home in the evening, away by day. */
const HOME_RHYTHM = [
	3, 4, 5, 5, 5, 4, 3, 2, 2, 2, 1.6, 1.3, 1.2, 1.2, 1.1, 0.9, 0.6, 0.4, 0.4, 0.5, 0.7, 1, 1.5, 2
];

const VEHICLES: Life['vehicles'] = {
	medianMg: 170,
	sigma: 0.55,
	lowMg: 60,
	highMg: 700,
	vanShare: 0.1,
	askewM: 0.2,
	mostEchoMg: 35,
	mostPassMg: 3500
};

const SHORT: Life['gaps'] = [
	{ share: 0.6, lowS: 3 * MINUTE_S, highS: 40 * MINUTE_S },
	{ share: 0.4, lowS: 40 * MINUTE_S, highS: 2.5 * HOUR_S }
];

/** How each zone is used. */
export const LIVES: Readonly<Record<string, Life>> = {
	court: {
		vehicles: VEHICLES,
		stays: [
			{ share: 0.3, lowS: 20 * MINUTE_S, highS: 2 * HOUR_S },
			{ share: 0.7, lowS: 2 * HOUR_S, highS: 9 * HOUR_S }
		],
		gaps: SHORT,
		gapByHour: DAY_RHYTHM,
		localOffsetMs: LOCAL_OFFSET_MS
	},
	quay: {
		vehicles: VEHICLES,
		stays: [
			{ share: 0.5, lowS: 5 * MINUTE_S, highS: 40 * MINUTE_S },
			{ share: 0.5, lowS: 40 * MINUTE_S, highS: 3 * HOUR_S }
		],
		gaps: SHORT,
		gapByHour: DAY_RHYTHM,
		localOffsetMs: LOCAL_OFFSET_MS
	},
	lane: {
		vehicles: VEHICLES,
		stays: [
			{ share: 0.35, lowS: 15 * MINUTE_S, highS: 2 * HOUR_S },
			{ share: 0.55, lowS: 6 * HOUR_S, highS: 15 * HOUR_S },
			{ share: 0.1, lowS: 15 * HOUR_S, highS: 46 * HOUR_S }
		],
		gaps: SHORT,
		gapByHour: HOME_RHYTHM,
		localOffsetMs: LOCAL_OFFSET_MS
	}
};

/** What is wrong at this site, by bay code. */
export interface Trouble {
	events: NodeEvent[];
	/** Not heard from then on. */
	silentFromMs: number;
	cellEndsFromMs: number;
}

const HOUR_MS = 3_600_000;
const DAY_MS = 24 * HOUR_MS;

const DOUBTFUL = 'C06';

/** The doubtful bay stays empty around the first start: a vehicle's coming or going would settle the doubt. */
export const isSpared = (
	code: string,
	visit: { inFromMs: number; outToMs: number },
	bornMs: number
): boolean =>
	code === DOUBTFUL &&
	visit.outToMs > bornMs - 6 * HOUR_MS &&
	visit.inFromMs < bornMs + 30 * HOUR_MS;

/** Three drifting (one of them due for a film refresh), one inverted, one silent, one low cell, one doubtful; times count from the demo's first start. */
export function troubleOf(code: string, bornMs: number): Trouble {
	const trouble: Trouble = { events: [], silentFromMs: Infinity, cellEndsFromMs: Infinity };
	if (code === 'Q04') {
		const atMs = bornMs - 3.2 * DAY_MS;
		trouble.events.push({
			kind: 'loss',
			atMs,
			toMs: atMs + 9 * DAY_MS,
			remaining: [0.95, 0.93, 0.915]
		});
	} else if (code === 'Q11') {
		// A film that loses fast enough to be due for a pulse within days.
		trouble.events.push({
			kind: 'loss',
			atMs: bornMs - 3.4 * DAY_MS,
			toMs: bornMs - 0.4 * DAY_MS,
			remaining: [0.93, 0.94, 0.92]
		});
	} else if (code === 'C03') {
		// Steel laid nearby, told by the pair of the next night, and an offset that creeps ever since.
		trouble.events.push(
			{ kind: 'surroundings', atMs: bornMs - 5.3 * DAY_MS, byMg: [9, -13, 10] },
			{
				kind: 'offset',
				atMs: bornMs - 3 * DAY_MS,
				toMs: bornMs - 0.5 * DAY_MS,
				byMg: [9, 7, -9]
			}
		);
	} else if (code === 'C13') {
		trouble.events.push({ kind: 'flip', atMs: bornMs - 7.3 * HOUR_MS, axes: [0, 1, 2] });
	} else if (code === 'L02') trouble.silentFromMs = bornMs - 19.6 * HOUR_MS;
	else if (code === 'Q09') trouble.cellEndsFromMs = bornMs - 13 * DAY_MS;
	else if (code === DOUBTFUL) {
		trouble.events.push({
			kind: 'magnet',
			atMs: bornMs - 4.4 * HOUR_MS,
			durationMs: 3500,
			peakMg: 12_000,
			leaves: [0.7, 0.85, 0.6]
		});
	}
	return trouble;
}
