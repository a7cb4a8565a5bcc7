import type { DriftBoard } from '$lib/schemas/desk-drift';

type Line = DriftBoard['line'];

export interface LineCurves {
	timesS: number[];
	h: (number | null)[];
	e: (number | null)[];
	z: (number | null)[];
}

const HOUR_S = 3600;

/** Hours whose change is not known, and hours not closed, are gaps. */
export function lineCurves(points: Line['points']): LineCurves {
	const curves: LineCurves = { timesS: [], h: [], e: [], z: [] };
	const put = (atS: number, change: readonly [number, number, number] | null) => {
		curves.timesS.push(atS);
		curves.h.push(change?.[0] ?? null);
		curves.e.push(change?.[1] ?? null);
		curves.z.push(change?.[2] ?? null);
	};
	let lastS: number | null = null;
	for (const { at, changeMg } of points) {
		const atS = Date.parse(at) / 1000;
		if (lastS !== null && atS - lastS > 1.5 * HOUR_S) put(lastS + HOUR_S, null);
		put(atS, changeMg);
		lastS = atS;
	}
	return curves;
}

/** Steps of 3 h: each range as a level line from its begin to its end. */
export function rangeCurve(ranges: Line['kRanges']): {
	timesS: number[];
	rangeMg: (number | null)[];
} {
	const timesS: number[] = [];
	const rangeMg: (number | null)[] = [];
	let endS: number | null = null;
	for (const { from, to, rangeMg: range } of ranges) {
		const [fromS, toS] = [Date.parse(from) / 1000, Date.parse(to) / 1000];
		if (endS !== null && fromS > endS) {
			timesS.push(endS + 1);
			rangeMg.push(null);
		}
		timesS.push(fromS, toS - 1);
		rangeMg.push(range, range);
		endS = toS;
	}
	return { timesS, rangeMg };
}

/** A limit is written only where its words do not run into another's. */
const LEAST_SHARE = 0.14;

/** The limits of the K scale that matter beside these ranges: up to the first above the largest, legible ones only. */
export function shownLimits(
	limitsMg: readonly number[],
	rangesMg: readonly number[]
): { k: number; limitMg: number }[] {
	const largest = Math.max(0, ...rangesMg);
	const above = limitsMg.findIndex((limit) => limit > largest);
	const top = limitsMg[above === -1 ? limitsMg.length - 1 : above] ?? 1;
	const shown: { k: number; limitMg: number }[] = [];
	let free = Infinity;
	for (let k = limitsMg.length - 1; k > 0; k -= 1) {
		const limitMg = limitsMg[k] ?? 0;
		if (limitMg > top || free - limitMg < LEAST_SHARE * top) continue;
		shown.unshift({ k, limitMg });
		free = limitMg;
	}
	return shown;
}
