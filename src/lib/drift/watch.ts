import { CUSUM_START, cusumSignals, cusumStep, type CusumState } from '$lib/numeric/control-chart';
import { robustSigma } from '$lib/numeric/mad';
import { median } from '$lib/numeric/quantile';
import { add, ZERO, type Vec3 } from '$lib/magnetics/vector';
import { sureMagnitude } from './decompose';
import type { DriftSettings } from './params';
import type { HourParts } from './types';

/** Medians of one UTC day. */
export interface DayRecord {
	dayMs: number;
	unexplainedMg: Vec3;
	/** Unexplained, bridge and surroundings together: goes on over a pair, which only moves it from one to another. */
	movementMg: Vec3;
	hours: number;
	/** Counts pairs: unexplained starts anew with each. */
	segment: number;
	/** Counts film losses healed and references: movement starts anew with each. */
	run: number;
}

interface Centre {
	/** Null for the first days after a pair, until they say where unexplained stands now. */
	zeroMg: Vec3 | null;
	sigmaMg: Vec3;
}

/** What is remembered to tell drift from noise; bounded. */
export interface WatchState {
	/** Hours running at the drifting limit, at the refresh limit, and under the former. */
	overHours: number;
	refreshHours: number;
	underHours: number;
	/** First hour of the run over the drifting limit. */
	beganMs: number | null;
	/** Since when 'drifting' holds; null = it does not. */
	driftingSinceMs: number | null;
	/** Which rule it was. */
	driftingBy: 'level' | 'cusum' | null;
	/** First hour of the run over the refresh limit. */
	refreshBeganMs: number | null;
	cusum: readonly [CusumState, CusumState, CusumState];
	centre: Centre | null;
	today: { dayMs: number; unexplained: readonly Vec3[]; movement: readonly Vec3[] } | null;
	days: readonly DayRecord[];
	segment: number;
	run: number;
}

const NO_CUSUM = [CUSUM_START, CUSUM_START, CUSUM_START] as const;
export const WATCH_START: WatchState = {
	overHours: 0,
	refreshHours: 0,
	underHours: 0,
	beganMs: null,
	driftingSinceMs: null,
	driftingBy: null,
	refreshBeganMs: null,
	cusum: NO_CUSUM,
	centre: null,
	today: null,
	days: [],
	segment: 0,
	run: 0
};

const DAY_MS = 86_400_000;
const KEPT_DAYS = 60;
/** Days after a pair that say where zero is. */
const ZERO_DAYS = 3;
/** Days of the median that stands for a node's own residual (site line). */
const OWN_DAYS = 7;

const dayOf = (atMs: number): number => Math.floor(atMs / DAY_MS) * DAY_MS;

function medians(vectors: readonly Vec3[]): Vec3 {
	const axis = (i: 0 | 1 | 2) => median(vectors.map((v) => v[i]));
	return [axis(0), axis(1), axis(2)];
}

/** Level rule: hours running at a limit, by what is sure of the vector. */
function watchLevel(state: WatchState, parts: HourParts, settings: DriftSettings): WatchState {
	if (parts.errorMg === null) return state;
	const sureMg = sureMagnitude(parts.unexplainedMg, parts.errorMg);
	const over = sureMg >= settings.driftingMg;
	const refresh = sureMg >= settings.refreshMg;
	return {
		...state,
		overHours: over ? state.overHours + 1 : 0,
		underHours: over ? 0 : state.underHours + 1,
		beganMs: over ? (state.beganMs ?? parts.hourMs) : null,
		refreshHours: refresh ? state.refreshHours + 1 : 0,
		refreshBeganMs: refresh ? (state.refreshBeganMs ?? parts.hourMs) : null
	};
}

function judge(state: WatchState, atMs: number, settings: DriftSettings): WatchState {
	const level = state.overHours >= settings.driftingHours;
	const levelHeld = state.driftingBy === 'level' && state.underHours < settings.driftingHours;
	const sums = cusumOver(state, settings);
	if (level || levelHeld || sums)
		return {
			...state,
			driftingSinceMs: state.driftingSinceMs ?? (level ? (state.beganMs ?? atMs) : atMs),
			driftingBy: level || levelHeld ? 'level' : 'cusum'
		};
	return { ...state, driftingSinceMs: null, driftingBy: null };
}

/** Per-axis decision limit h = max(6 sigma, 10 mG). */
function cusumOver({ cusum, centre }: WatchState, settings: DriftSettings): boolean {
	if (centre === null) return false;
	return cusum.some((sums, i) =>
		cusumSignals(sums, Math.max(settings.cusumH * (centre.sigmaMg[i] as number), settings.cusumHMg))
	);
}

/** Scatter of daily medians, by movement: it goes on over pairs, so their re-zeroing is no scatter. */
function scatter(days: readonly DayRecord[]): Vec3 {
	const axis = (i: 0 | 1 | 2) => robustSigma(days.map(({ movementMg }) => movementMg[i]));
	return [axis(0), axis(1), axis(2)];
}

/** Scatter, and at first zero too, from the first 14 daily medians. */
function centreOf(days: readonly DayRecord[], wanted: number): Centre | null {
	if (days.length < wanted) return null;
	const first = days.slice(0, wanted);
	const alone = first.every(({ segment }) => segment === first[0]?.segment);
	return {
		zeroMg: alone ? medians(first.map(({ unexplainedMg }) => unexplainedMg)) : null,
		sigmaMg: scatter(first)
	};
}

/**
 * A pair is single readings beside hours of many: it leaves unexplained off by a milligauss or two. Summed for
 * a week that would be a false alarm, so zero is where the first days after it stand.
 */
function rezeroed(centre: Centre, { days, segment }: WatchState): Centre {
	if (centre.zeroMg !== null) return centre;
	const since = days.filter((day) => day.segment === segment);
	if (since.length < ZERO_DAYS) return centre;
	return { ...centre, zeroMg: medians(since.map(({ unexplainedMg }) => unexplainedMg)) };
}

function stepCusum(state: WatchState, value: Vec3, settings: DriftSettings): WatchState['cusum'] {
	const zeroMg = state.centre?.zeroMg ?? null;
	const { centre } = state;
	if (centre === null || zeroMg === null) return state.cusum;
	const axis = (i: 0 | 1 | 2) =>
		cusumStep(state.cusum[i], value[i], {
			target: zeroMg[i],
			k: Math.max(settings.cusumK * centre.sigmaMg[i], settings.cusumKMg)
		});
	return [axis(0), axis(1), axis(2)];
}

function closeDay(state: WatchState, settings: DriftSettings): WatchState {
	const { today } = state;
	if (today === null || today.unexplained.length === 0) return { ...state, today: null };
	const day: DayRecord = {
		dayMs: today.dayMs,
		unexplainedMg: medians(today.unexplained),
		movementMg: medians(today.movement),
		hours: today.unexplained.length,
		segment: state.segment,
		run: state.run
	};
	const cusum = stepCusum(state, day.unexplainedMg, settings);
	const days = [...state.days, day].slice(-KEPT_DAYS);
	const next = { ...state, today: null, days, cusum };
	const centre = state.centre ?? centreOf(days, settings.centreDays);
	return { ...next, centre: centre === null ? null : rezeroed(centre, next) };
}

/** Takes one decomposed hour, later than all before it. Hours that cannot be judged pass by. */
export function watchHour(
	state: WatchState,
	parts: HourParts,
	settings: DriftSettings
): WatchState {
	const dayMs = dayOf(parts.hourMs);
	const turned = state.today !== null && state.today.dayMs < dayMs;
	const at = turned ? closeDay(state, settings) : state;
	const levelled = watchLevel(at, parts, settings);
	if (parts.errorMg === null) return judge(levelled, parts.hourMs, settings);
	const movement = add(parts.unexplainedMg, add(parts.bridgeMg, parts.surroundingsMg));
	const today = {
		dayMs,
		unexplained: [...(at.today?.unexplained ?? []), parts.unexplainedMg],
		movement: [...(at.today?.movement ?? []), movement]
	};
	return judge({ ...levelled, today }, parts.hourMs, settings);
}

/**
 * A pair re-zeroes unexplained: runs and sums start anew, and zero is found anew. `healed`: the film
 * had lost something, so movement steps back too.
 */
export function watchPair(state: WatchState, healed: 'film' | 'nothing'): WatchState {
	return {
		...state,
		overHours: 0,
		refreshHours: 0,
		underHours: 0,
		beganMs: null,
		refreshBeganMs: null,
		driftingSinceMs: null,
		driftingBy: null,
		cusum: NO_CUSUM,
		centre: state.centre === null ? null : { ...state.centre, zeroMg: null },
		today: null,
		segment: state.segment + 1,
		run: healed === 'film' ? state.run + 1 : state.run
	};
}

/** What of a node's residual has stood there for a week: its own, not the site's. */
export function ownResidual({ days, segment }: WatchState): Vec3 {
	const recent = days.filter((day) => day.segment === segment).slice(-OWN_DAYS);
	return recent.length === 0 ? ZERO : medians(recent.map(({ unexplainedMg }) => unexplainedMg));
}
