import { HAIR, INK, INK_2, Pen, textWidth } from './pen';
import { encodePng } from './png';

export interface DriftPoint {
	atMs: number;
	/** Length of the unexplained drift, mG. */
	valueMg: number;
}

/** Twice the size at which it is shown (480 by 160), so that fine screens draw it sharp. */
export const PLOT = { width: 960, height: 320, shownWidth: 480, shownHeight: 160 } as const;
const LEFT = 96;
const RIGHT = 24;
const TOP = 20;
const BOTTOM = 48;
/** A longer pause between points is drawn as one. */
const GAP_MS = 3 * 3_600_000;
const DAY_MS = 86_400_000;

/** Unexplained drift over time against its limits, as a PNG; null with fewer than two points. */
export function driftPlot(
	points: readonly DriftPoint[],
	limitsMg: readonly number[],
	nowMs: number,
	nowWord = 'now'
): Buffer | null {
	const [first, last] = [points[0], points.at(-1)];
	if (first === undefined || last === undefined || points.length < 2) return null;
	const mostMg = Math.max(...points.map(({ valueMg }) => valueMg), ...limitsMg) * 1.15;
	const spanMs = Math.max(nowMs - first.atMs, 3_600_000);
	const x = (atMs: number) => LEFT + ((atMs - first.atMs) / spanMs) * (PLOT.width - LEFT - RIGHT);
	const y = (mg: number) => PLOT.height - BOTTOM - (mg / mostMg) * (PLOT.height - TOP - BOTTOM);
	const pen = new Pen(PLOT.width, PLOT.height);
	axes(pen, y);
	for (const limit of limitsMg) {
		pen.dashDot(y(limit), LEFT, PLOT.width - RIGHT, INK_2);
		label(pen, `${limit} mG`, y(limit));
	}
	label(pen, '0 mG', y(0));
	pen.text(nowWord, PLOT.width - RIGHT - textWidth(nowWord) + 4, PLOT.height - BOTTOM + 14, INK_2);
	dayMarks(pen, spanMs / DAY_MS, x, first.atMs, nowMs);
	curve(pen, points, x, y);
	return encodePng(pen.raster);
}

function axes(pen: Pen, y: (mg: number) => number): void {
	pen.line([LEFT, TOP], [LEFT, y(0)], INK_2, 2);
	pen.line([LEFT, y(0)], [PLOT.width - RIGHT, y(0)], INK_2, 2);
}

const label = (pen: Pen, words: string, y: number): void => {
	pen.text(words, LEFT - 10 - textWidth(words), y - 7, INK_2);
};

/** A mark every day or week, counted back from now. */
function dayMarks(
	pen: Pen,
	days: number,
	x: (atMs: number) => number,
	fromMs: number,
	nowMs: number
): void {
	const stepDays = days <= 8 ? 1 : 7;
	for (let back = stepDays; nowMs - back * DAY_MS >= fromMs; back += stepDays) {
		const at = x(nowMs - back * DAY_MS);
		pen.line([at, PLOT.height - BOTTOM], [at, PLOT.height - BOTTOM - 8], INK_2, 2);
		const words = `-${back} d`;
		if (at - textWidth(words) / 2 > LEFT)
			pen.text(words, at - textWidth(words) / 2, PLOT.height - BOTTOM + 14, INK_2);
		pen.line([at, TOP], [at, PLOT.height - BOTTOM - 12], HAIR, 1);
	}
}

function curve(
	pen: Pen,
	points: readonly DriftPoint[],
	x: (atMs: number) => number,
	y: (mg: number) => number
): void {
	points.forEach((point, i) => {
		const before = points[i - 1];
		const to = [x(point.atMs), y(point.valueMg)] as const;
		if (before === undefined || point.atMs - before.atMs > GAP_MS) pen.dot(...to, INK, 5);
		else pen.line([x(before.atMs), y(before.valueMg)], to, INK, 4);
	});
}
