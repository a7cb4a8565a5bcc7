import type { DriftBoard, DriftRow } from '$lib/schemas/desk-drift';
import { milligauss } from '$lib/format/field';
import { closedPath, line, type Pen } from './pen';
import type { PlanLayout, Xy } from './types';
import { toScreen, type View } from './view';

/** Which nodes have an arrow: none, those past the drifting limit, every one that was judged. */
export type ArrowChoice = 'none' | 'past' | 'all';
export const nextChoice = (now: ArrowChoice): ArrowChoice =>
	now === 'past' ? 'all' : now === 'all' ? 'none' : 'past';

/** Displacement of one bay's field, as surveyors draw settlement. */
export interface DriftArrow {
	/** Index of the bay in the layout. */
	bay: number;
	/** Length in the plan, mG: all of it without a heading, else the level part. */
	lengthMg: number;
	/** East of true north; null: straight up the sheet. */
	bearingDeg: number | null;
	/** Written beside it where the arrow lies in the plan; positive = down. */
	downMg: number | null;
}

/** Length on the sheet of an arrow of the stated size. */
export const SCALE_PX = 44;
/** The longest arrow may be this many times the stated one. */
const LONGEST = 2;
const STEPS = [1, 2, 5];
const LEAST_SCALE_MG = 5;

/** Arrows of the rows that are wanted; bays that are not drawn have none. */
export function arrowsOf(
	rows: readonly DriftRow[],
	layout: PlanLayout,
	choice: ArrowChoice,
	limits: DriftBoard['limits']
): DriftArrow[] {
	if (choice === 'none') return [];
	const places = new Map(layout.bays.map(({ code }, at) => [code, at]));
	return rows.flatMap((row): DriftArrow[] => {
		const bay = places.get(row.bay);
		const past = row.drifting !== null || row.refresh.due || (row.sureMg ?? 0) >= limits.driftingMg;
		if (bay === undefined || row.arrow === null || (choice === 'past' && !past)) return [];
		const { bearingDeg, lengthMg, levelMg, downMg } = row.arrow;
		return bearingDeg === null
			? [{ bay, lengthMg, bearingDeg, downMg: null }]
			: [{ bay, lengthMg: levelMg, bearingDeg, downMg }];
	});
}

/** What `SCALE_PX` stands for, mG, in 1-2-5 steps: the longest arrow is at most twice that. */
export function arrowScaleMg(arrows: readonly DriftArrow[]): number {
	const longest = Math.max(0, ...arrows.map(({ lengthMg }) => lengthMg));
	const raw = Math.max(LEAST_SCALE_MG, longest / LONGEST);
	const power = 10 ** Math.floor(Math.log10(raw));
	const step = STEPS.find((s) => s * power >= raw - 1e-9) ?? 10;
	return step * power;
}

/** From the bay's centre; a turn of the sheet turns arrows with a heading, the others stand straight up. */
export function drawArrows(
	pen: Pen,
	{ layout, view, arrows }: { layout: PlanLayout; view: View; arrows: readonly DriftArrow[] }
): void {
	const scaleMg = arrowScaleMg(arrows);
	for (const arrow of arrows) {
		const bay = layout.bays[arrow.bay];
		if (bay === undefined) continue;
		const from = footOf(toScreen(view, bay.centre), bay.shortM * view.scale);
		const tip = tipOf(from, arrow, scaleMg, layout.northAngle);
		drawArrow(pen, from, tip);
		if (arrow.downMg !== null) writeVertical(pen, from, tip, arrow.downMg);
	}
}

/** Beside the bay's code, where there is one. */
function footOf(centre: Xy, shortPx: number): Xy {
	return shortPx < LETTERED_PX
		? centre
		: { x: centre.x + Math.min(BESIDE_PX, BESIDE_SHARE * shortPx), y: centre.y };
}
const LETTERED_PX = 14;
const BESIDE_PX = 30;
const BESIDE_SHARE = 0.4;

export function tipOf(
	from: Xy,
	{ lengthMg, bearingDeg }: DriftArrow,
	scaleMg: number,
	northAngle: number
): Xy {
	const length = (lengthMg / scaleMg) * SCALE_PX;
	const angle = bearingDeg === null ? 0 : northAngle + (bearingDeg * Math.PI) / 180;
	return { x: from.x + length * Math.sin(angle), y: from.y - length * Math.cos(angle) };
}

const HEAD_PX = { long: 9, half: 3.5 };
const FOOT_PX = 2.6;

function drawArrow(pen: Pen, from: Xy, tip: Xy): void {
	const length = Math.hypot(tip.x - from.x, tip.y - from.y);
	const along =
		length === 0 ? { x: 0, y: -1 } : { x: (tip.x - from.x) / length, y: (tip.y - from.y) / length };
	const neck = { x: tip.x - along.x * HEAD_PX.long, y: tip.y - along.y * HEAD_PX.long };
	const wing = (side: number): Xy => ({
		x: neck.x - side * along.y * HEAD_PX.half,
		y: neck.y + side * along.x * HEAD_PX.half
	});
	const head = closedPath([tip, wing(1), wing(-1)]);
	const foot = closedPath(
		Array.from({ length: 10 }, (_, i) => ({
			x: from.x + FOOT_PX * Math.cos((i * Math.PI) / 5),
			y: from.y + FOOT_PX * Math.sin((i * Math.PI) / 5)
		}))
	);
	const shaft = line(from, length > HEAD_PX.long ? neck : from);
	pen.stroke([shaft, head, foot], { ink: 'paper', width: 5 });
	pen.stroke([shaft], { ink: 'ink', width: 2 });
	pen.fill([head, foot], 'ink');
}

/** 'down 12 mG' beside the tip, away from the shaft. */
function writeVertical(pen: Pen, from: Xy, tip: Xy, downMg: number): void {
	const text = `${downMg >= 0 ? 'down' : 'up'} ${milligauss(Math.abs(downMg))}`;
	const left = tip.x < from.x;
	pen.text(
		text,
		{ x: tip.x + (left ? -6 : 6), y: tip.y },
		{ ink: 'ink', sizePx: 11, align: left ? 'right' : 'left', cleared: true }
	);
}
