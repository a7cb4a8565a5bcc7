import {
	drawLarge,
	drawSmall,
	drawStrip,
	middleOf,
	sizeOf,
	type BayMark,
	type SeenBay
} from './draw-bays';
import { drawArrows, type DriftArrow } from './drift-arrows';
import { drawFlag, type Flag } from './flags';
import { closedPath, line, textWidth, type Path, type Pen } from './pen';
import type { PlanLayout, Xy } from './types';
import { BORDER_PX, stepM, toPage, toScreen, type Size, type View } from './view';
import { drawZoneNames } from './zone-names';

export type { Flag } from './flags';
export interface Scene {
	layout: PlanLayout;
	view: View;
	size: Size;
	marks: readonly BayMark[];
	flags: readonly Flag[];
	/** Displacement of the field, where it is wanted. */
	arrows?: readonly DriftArrow[] | undefined;
	/** Bays that changed in the last minute. */
	revised: readonly number[];
	picked: number | null;
	/** The bay that the keyboard stands on, while the plan has the focus. */
	cursor: number | null;
	zoneNames: ReadonlyMap<string, string>;
	/** Where the leader line leaves the drawing, in px; null without a picked bay's note. */
	leaderTo: Xy | null;
	/** Least size of lettering; larger for a screen across the room. */
	letterLeastPx?: number;
}
const LETTER_LEAST_PX = 9.5;

const SHOW_BEYOND_PX = 30;

/** Draws the whole plan: bays, zone names, flags, what is picked, and the border with metre marks. */
export function drawPlan(pen: Pen, scene: Scene): void {
	const seen = seenBays(scene);
	const typical = median(scene.layout.bays.map((bay) => bay.shortM)) * scene.view.scale;
	const size = sizeOf(typical);
	if (size === 'large')
		drawLarge(
			pen,
			seen.filter((one) => one !== null),
			scene.view,
			scene.letterLeastPx ?? LETTER_LEAST_PX
		);
	else if (size === 'small')
		drawSmall(
			pen,
			seen.filter((one) => one !== null)
		);
	else
		for (const row of scene.layout.rows)
			drawStrip(
				pen,
				row.bays.map((at) => seen[at] ?? null).filter((s) => s !== null),
				scene.view
			);
	drawZoneNames(pen, scene);
	drawRevisions(pen, scene);
	if (scene.arrows !== undefined) drawArrows(pen, { ...scene, arrows: scene.arrows });
	for (const flag of scene.flags) drawFlag(pen, scene, flag);
	drawBorder(pen, scene);
	drawPicked(pen, scene);
}

/** Bays in or near the drawing, by index; null for the others. */
function seenBays({ layout, view, size, marks }: Scene): (SeenBay | null)[] {
	const hidden: BayMark = { mark: 'unknown', wasText: null, faded: false };
	return layout.bays.map((bay, at) => {
		const centre = toScreen(view, bay.centre);
		const reach = bay.longM * view.scale + SHOW_BEYOND_PX;
		const outside =
			centre.x < -reach ||
			centre.y < -reach ||
			centre.x > size.width + reach ||
			centre.y > size.height + reach;
		if (outside) return null;
		const corners = bay.corners.map((corner) => toScreen(view, corner));
		return { bay, corners, shown: marks[at] ?? hidden };
	});
}

/** A thin revision cloud around what changed in the last minute. */
function drawRevisions(pen: Pen, { layout, view, revised }: Scene): void {
	const clouds = revised.flatMap((at) => {
		const bay = layout.bays[at];
		return bay === undefined ? [] : [cloud(bay.corners.map((c) => toScreen(view, c)))];
	});
	pen.stroke(clouds, { ink: 'ink-2', width: 0.8 });
}

/** Scallops along an outline grown by 4 px. */
function cloud(corners: readonly Xy[]): Path {
	const centre = middleOf(corners);
	const grown = corners.map((c) => {
		const length = Math.hypot(c.x - centre.x, c.y - centre.y);
		const factor = 1 + 6 / Math.max(1, length);
		return { x: centre.x + (c.x - centre.x) * factor, y: centre.y + (c.y - centre.y) * factor };
	});
	const points: Xy[] = [];
	grown.forEach((a, at) => {
		const b = grown[(at + 1) % grown.length] ?? a;
		const length = Math.hypot(b.x - a.x, b.y - a.y);
		const bumps = Math.max(2, Math.round(length / 9));
		const out = { x: (b.y - a.y) / Math.max(1, length), y: -(b.x - a.x) / Math.max(1, length) };
		const middle = { x: (a.x + b.x) / 2 - centre.x, y: (a.y + b.y) / 2 - centre.y };
		const sign = out.x * middle.x + out.y * middle.y >= 0 ? 1 : -1;
		for (let step = 0; step < bumps * 4; step += 1) {
			const share = step / (bumps * 4);
			const bulge = sign * 3 * Math.abs(Math.sin(share * bumps * Math.PI));
			points.push({
				x: a.x + (b.x - a.x) * share + out.x * bulge,
				y: a.y + (b.y - a.y) * share + out.y * bulge
			});
		}
	});
	return closedPath(points);
}

function drawPicked(pen: Pen, scene: Scene): void {
	const { layout, view, picked, cursor, leaderTo } = scene;
	const outline = (at: number, growPx: number) => {
		const bay = layout.bays[at];
		if (bay === undefined) return [];
		const centre = toScreen(view, bay.centre);
		return [
			closedPath(
				bay.corners.map((c) => {
					const p = toScreen(view, c);
					return {
						x: p.x + Math.sign(p.x - centre.x) * growPx,
						y: p.y + Math.sign(p.y - centre.y) * growPx
					};
				})
			)
		];
	};
	if (picked !== null) pen.stroke(outline(picked, 2), { ink: 'ink', width: 2 });
	if (cursor !== null) {
		pen.stroke(outline(cursor, 4), { ink: 'paper', width: 5 });
		pen.stroke(outline(cursor, 2.5), { ink: 'ink', width: 1.3 });
		pen.stroke(outline(cursor, 5.5), { ink: 'ink', width: 1.3 });
	}
	if (picked !== null && leaderTo !== null) drawLeader(pen, scene, picked, leaderTo);
}

/** From a dot in the bay, slanting, then level to the edge where the note stands. */
function drawLeader(pen: Pen, { layout, view }: Scene, picked: number, to: Xy): void {
	const bay = layout.bays[picked];
	if (bay === undefined) return;
	const centre = toScreen(view, bay.centre);
	// The dot stands beside the code, towards the note.
	const corner = bay.corners
		.map((c) => toScreen(view, c))
		.reduce((a, b) =>
			Math.hypot(b.x - to.x, b.y - to.y) < Math.hypot(a.x - to.x, a.y - to.y) ? b : a
		);
	const from = {
		x: centre.x + (corner.x - centre.x) * 0.6,
		y: centre.y + (corner.y - centre.y) * 0.6
	};
	const slant = Math.min(Math.abs(to.y - from.y), Math.max(0, to.x - from.x - 20));
	const knee = { x: to.x - Math.max(14, to.x - from.x - slant), y: to.y };
	pen.stroke([line(from, knee, to)], { ink: 'paper', width: 3.5 });
	pen.stroke([line(from, knee, to)], { ink: 'ink', width: 1 });
	const dot = Array.from({ length: 12 }, (_, i) => ({
		x: from.x + 3 * Math.cos((i * Math.PI) / 6),
		y: from.y + 3 * Math.sin((i * Math.PI) / 6)
	}));
	pen.fill([closedPath(dot)], 'ink');
}

/** Frame lines and metre marks along the border, counted from the drawing's upper left corner. */
function drawBorder(pen: Pen, { view, size, letterLeastPx }: Scene): void {
	const { width, height } = size;
	const b = BORDER_PX;
	const rect = (x: number, y: number, w: number, h: number) =>
		closedPath([
			{ x, y },
			{ x: x + w, y },
			{ x: x + w, y: y + h },
			{ x, y: y + h }
		]);
	pen.fill(
		[
			rect(0, 0, width, b),
			rect(0, height - b, width, b),
			rect(0, 0, b, height),
			rect(width - b, 0, b, height)
		],
		'paper'
	);
	const step = stepM(view.scale, 64);
	// Numbers as large as a wall needs find no room in the border: it keeps its marks.
	const numbered = letterLeastPx === undefined;
	const [from, to] = [toPage(view, { x: b, y: b }), toPage(view, { x: width - b, y: height - b })];
	const ticks: Path[] = [];
	for (let m = Math.ceil(from.x / step) * step; m <= to.x; m += step) {
		const x = toScreen(view, { x: m, y: 0 }).x;
		ticks.push(
			line({ x, y: b - 5 }, { x, y: b }),
			line({ x, y: height - b }, { x, y: height - b + 5 })
		);
		const text = String(Math.round(m * 100) / 100);
		if (numbered && x + textWidth(text, 10) < width - b)
			pen.text(text, { x, y: b - 11 }, { ink: 'ink-2', sizePx: 10, align: 'centre' });
	}
	for (let m = Math.ceil(from.y / step) * step; m <= to.y; m += step) {
		const y = toScreen(view, { x: 0, y: m }).y;
		ticks.push(
			line({ x: b - 5, y }, { x: b, y }),
			line({ x: width - b, y }, { x: width - b + 5, y })
		);
		if (!numbered) continue;
		pen.text(
			String(Math.round(m * 100) / 100),
			{ x: b - 11, y },
			{ ink: 'ink-2', sizePx: 10, align: 'centre', angle: -Math.PI / 2 }
		);
	}
	pen.stroke(ticks, { ink: 'ink-2', width: 0.8 });
	if (numbered)
		pen.text('m', { x: b / 2, y: b / 2 }, { ink: 'ink-2', sizePx: 10, align: 'centre' });
	pen.stroke([rect(b, b, width - 2 * b, height - 2 * b)], { ink: 'ink', width: 1.4 });
	pen.stroke([rect(0.5, 0.5, width - 1, height - 1)], { ink: 'hair', width: 0.8 });
}

function median(values: readonly number[]): number {
	const sorted = [...values].sort((a, b) => a - b);
	return sorted[Math.floor(sorted.length / 2)] ?? 1;
}
