import { robustSigma } from '$lib/numeric/mad';
import { median, weightedMedian } from '$lib/numeric/quantile';
import type { Vec3 } from '$lib/magnetics/vector';
import type { DriftSettings } from './params';

/** Slope of a node's level over temperature, mG/°C an axis, with its standard error. */
export interface Slope {
	perC: Vec3;
	errorPerC: Vec3;
	triples: number;
}

interface Point {
	hourMs: number;
	levelMg: Vec3;
	tempC: number;
	stay: string | null;
}

/** Median of many triples, with the sum of their denominators as its weight. */
interface Batch {
	atMs: number;
	perC: Vec3;
	weight: number;
	triples: number;
}

/** All that a slope needs to go on; bounded, so that an hour costs the same on day 1 and on day 700. */
export interface SlopeState {
	/** Points of the last 24 h. */
	recent: readonly Point[];
	/** One a closed hour of the running UTC day. */
	hours: readonly Batch[];
	/** One a day. */
	days: readonly Batch[];
}

export const SLOPE_START: SlopeState = { recent: [], hours: [], days: [] };

const DAY_MS = 86_400_000;
/** Standard deviation of a median over that of a mean, normal values. */
const MEDIAN_FACTOR = Math.sqrt(Math.PI / 2);
/** Hours of one day share their weather: about this many count as one. */
const HOURS_PER_LOOK = 4;
/** Triples reach back into the day before, so days that follow each other share half of what they say. */
const DAYS_PER_LOOK = 2;
const MIN_DAYS_FOR_SPREAD = 4;
/** No slope is known better than this: the axes are not exactly linear. */
const LEAST_ERROR_PER_C = 0.004;

/** (B_j - line(B_i, B_k)) / (T_j - line(T_i, T_k)): exact against any drift that is linear from i to k. */
function tripleSlopes(recent: readonly Point[], last: Point, leastC: number): Batch | null {
	const same = recent.filter((p) => p.stay === last.stay && last.hourMs - p.hourMs <= DAY_MS);
	const perAxis: [number[], number[], number[]] = [[], [], []];
	let weight = 0;
	for (let i = 0; i < same.length; i++) {
		const first = same[i] as Point;
		for (let j = i + 1; j < same.length; j++) {
			const middle = same[j] as Point;
			const along = (middle.hourMs - first.hourMs) / (last.hourMs - first.hourMs);
			const bend = middle.tempC - first.tempC - along * (last.tempC - first.tempC);
			if (Math.abs(bend) < leastC) continue;
			weight += Math.abs(bend);
			for (const axis of [0, 1, 2] as const) {
				const from = first.levelMg[axis];
				const off = middle.levelMg[axis] - from - along * (last.levelMg[axis] - from);
				perAxis[axis].push(off / bend);
			}
		}
	}
	const triples = perAxis[0].length;
	if (triples === 0) return null;
	const perC: Vec3 = [median(perAxis[0]), median(perAxis[1]), median(perAxis[2])];
	return { atMs: last.hourMs, perC, weight, triples };
}

function pool(batches: readonly Batch[], atMs: number): Batch {
	const weights = batches.map(({ weight }) => weight);
	const axis = (i: 0 | 1 | 2) =>
		weightedMedian(
			batches.map(({ perC }) => perC[i]),
			weights
		);
	return {
		atMs,
		perC: [axis(0), axis(1), axis(2)],
		weight: weights.reduce((sum, weight) => sum + weight, 0),
		triples: batches.reduce((sum, { triples }) => sum + triples, 0)
	};
}

const dayOf = (atMs: number): number => Math.floor(atMs / DAY_MS) * DAY_MS;

/** Takes one closed hour, later than all before it. `levelMg` = field + offset. */
export function addToSlope(state: SlopeState, point: Point, settings: DriftSettings): SlopeState {
	const dayMs = dayOf(point.hourMs);
	const turned = state.hours.length > 0 && dayOf((state.hours[0] as Batch).atMs) < dayMs;
	const days = turned
		? [...state.days, pool(state.hours, dayOf((state.hours[0] as Batch).atMs))].filter(
				({ atMs }) => atMs > dayMs - settings.slopeDays * DAY_MS
			)
		: state.days;
	const batch = tripleSlopes(state.recent, point, settings.tripleDenominatorC);
	const hours = turned ? [] : state.hours;
	return {
		recent: [...state.recent.filter((p) => point.hourMs - p.hourMs < DAY_MS), point],
		hours: batch === null ? hours : [...hours, batch],
		days
	};
}

/** A pulse may have moved the level: triples across it would tell film loss as temperature. */
export const breakSlope = (state: SlopeState): SlopeState => ({ ...state, recent: [] });

function spreadError(values: readonly number[], looks: number): number {
	return Math.max(LEAST_ERROR_PER_C, (MEDIAN_FACTOR * robustSigma(values)) / Math.sqrt(looks));
}

/** Effective number of weighted values. */
function effective(batches: readonly Batch[]): number {
	const sum = batches.reduce((total, { weight }) => total + weight, 0);
	return sum ** 2 / batches.reduce((total, { weight }) => total + weight ** 2, 0);
}

/** Slope so far, or null: too few triples give 'slope not known', never a guess (method 5.1). */
export function slopeOf(state: SlopeState, settings: DriftSettings): Slope | null {
	const running = state.hours.length > 0 ? [pool(state.hours, 0)] : [];
	const days = [...state.days, ...running];
	if (days.length === 0) return null;
	const all = pool(days, 0);
	if (all.triples < settings.minTriples) return null;
	const byDay = days.length >= MIN_DAYS_FOR_SPREAD;
	const parts = byDay || state.hours.length < 2 ? days : state.hours;
	const looks = byDay
		? effective(days) / DAYS_PER_LOOK
		: Math.max(1, parts.length / HOURS_PER_LOOK);
	const error = (i: 0 | 1 | 2) =>
		spreadError(
			parts.map(({ perC }) => perC[i]),
			looks
		);
	return { perC: all.perC, errorPerC: [error(0), error(1), error(2)], triples: all.triples };
}
