import { ewmaChart } from '$lib/numeric/control-chart';
import { robustSigma } from '$lib/numeric/mad';
import { hamedRaoFactor, mannKendall } from '$lib/numeric/mann-kendall';
import { median } from '$lib/numeric/quantile';
import { theilSen } from '$lib/numeric/theil-sen';
import { add, magnitude, scale, type Vec3 } from '$lib/magnetics/vector';
import type { DriftSettings } from './params';
import type { DayRecord } from './watch';

const DAY_MS = 86_400_000;
const MIN_DAYS = 5;
const SIGNIFICANT = 0.05;

/** Movement a day with Sen's 95 % limits an axis. */
export interface Rate {
	mgPerDay: Vec3;
	lowMgPerDay: Vec3;
	highMgPerDay: Vec3;
	/** Least of the three axes' Mann–Kendall p, times three, with Hamed–Rao variance. */
	p: number;
	/** Whether a trend is more than chance. */
	trend: boolean;
	days: number;
}

interface AxisRate {
	slope: number;
	low: number;
	high: number;
	p: number;
}

function axisRate(days: readonly DayRecord[], axis: 0 | 1 | 2): AxisRate {
	const times = days.map(({ dayMs }) => dayMs / DAY_MS);
	const values = days.map(({ movementMg }) => movementMg[axis]);
	const factor = hamedRaoFactor(values);
	const line = theilSen(times, values, { varianceFactor: factor });
	const { p } = mannKendall(values, factor);
	return { slope: line?.slope ?? 0, low: line?.low ?? 0, high: line?.high ?? 0, p };
}

/**
 * Theil–Sen an axis on daily medians of the last 14 days (method 5), since the film was last healed. Null
 * under 5 days.
 */
export function rateOf(days: readonly DayRecord[], settings: DriftSettings): Rate | null {
	const last = days.at(-1);
	if (last === undefined) return null;
	const used = days.filter(
		({ dayMs, run }) => run === last.run && dayMs > last.dayMs - settings.rateDays * DAY_MS
	);
	if (used.length < MIN_DAYS) return null;
	const axes = [axisRate(used, 0), axisRate(used, 1), axisRate(used, 2)] as const;
	const vector = (of: (axis: AxisRate) => number): Vec3 => [of(axes[0]), of(axes[1]), of(axes[2])];
	const p = Math.min(1, 3 * Math.min(...axes.map((axis) => axis.p)));
	return {
		mgPerDay: vector(({ slope }) => slope),
		lowMgPerDay: vector(({ low }) => low),
		highMgPerDay: vector(({ high }) => high),
		p,
		trend: p < SIGNIFICANT,
		days: used.length
	};
}

/** Days until |u + r t| reaches the limit; 0 when it is there, null when it never comes. */
export function daysUntil(from: Vec3, perDay: Vec3, limitMg: number): number | null {
	if (magnitude(from) >= limitMg) return 0;
	const a = perDay[0] ** 2 + perDay[1] ** 2 + perDay[2] ** 2;
	if (a === 0) return null;
	const b = from[0] * perDay[0] + from[1] * perDay[1] + from[2] * perDay[2];
	const c = magnitude(from) ** 2 - limitMg ** 2;
	return (-b + Math.sqrt(b * b - a * c)) / a;
}

export interface DaysToLimit {
	limitMg: number;
	/** Earliest, by Sen's limits. */
	from: number;
	/** Latest; null = may never come. */
	to: number | null;
}

/** Smallest and largest of every rate within Sen's limits: the corners, and the middle. */
function corners({ lowMgPerDay: low, highMgPerDay: high, mgPerDay }: Rate): Vec3[] {
	const ends = (i: 0 | 1 | 2) => [low[i], high[i]];
	const all = ends(0).flatMap((x) => ends(1).flatMap((y) => ends(2).map((z): Vec3 => [x, y, z])));
	return [...all, mgPerDay];
}

/** Whether zero lies within the limits of every axis that moves. */
function mayStandStill({ lowMgPerDay, highMgPerDay }: Rate): boolean {
	return lowMgPerDay.every((low, i) => low <= 0 && (highMgPerDay[i] as number) >= 0);
}

/** Days to the next limit ahead (drifting, then refresh) as a range; null without a trend or past both. */
export function daysToLimit(
	unexplainedMg: Vec3,
	rate: Rate | null,
	settings: DriftSettings
): DaysToLimit | null {
	if (rate === null || !rate.trend) return null;
	const now = magnitude(unexplainedMg);
	const limitMg = [settings.driftingMg, settings.refreshMg].find((limit) => now < limit);
	if (limitMg === undefined) return null;
	const found = corners(rate).map((perDay) => daysUntil(unexplainedMg, perDay, limitMg));
	const days = found.filter((value) => value !== null);
	if (days.length === 0) return null;
	const never = days.length < found.length || mayStandStill(rate);
	return { limitMg, from: Math.min(...days), to: never ? null : Math.max(...days) };
}

/** An EWMA chart of one axis of unexplained for people to look at; zero and scatter from the first 14 days. */
export function ewmaForPeople(
	days: readonly DayRecord[],
	axis: 0 | 1 | 2,
	settings: DriftSettings
): { dayMs: number[]; averages: number[]; lower: number; upper: number } | null {
	const values = days.map(({ unexplainedMg }) => unexplainedMg[axis]);
	const first = values.slice(0, settings.centreDays);
	if (first.length < MIN_DAYS) return null;
	const chart = ewmaChart(values, {
		target: median(first),
		sigma: robustSigma(first),
		lambda: settings.ewmaLambda,
		limitSigmas: settings.ewmaSigmas
	});
	return { dayMs: days.map(({ dayMs }) => dayMs), ...chart };
}

/** Where unexplained will be after some days at its rate. */
export const ahead = (unexplainedMg: Vec3, rate: Rate, days: number): Vec3 =>
	add(unexplainedMg, scale(rate.mgPerDay, days));
