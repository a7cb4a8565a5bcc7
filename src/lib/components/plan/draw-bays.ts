import type { Mark } from './marks';
import { closedPath, line, textWidth, type Path, type Pen } from './pen';
import type { PlacedBay, Xy } from './types';
import { toScreen, type View } from './view';

/** What the drawing needs to know of one bay. */
export interface BayMark {
	mark: Mark;
	/** 'was taken 08:12' under not known, else null. */
	wasText: string | null;
	/** Left out by the filter: drawn as a hairline only. */
	faded: boolean;
}

/** Sizes by the bay's short side on screen (product.md, 'The look'). */
export const LARGE_PX = 14;
export const SMALL_PX = 5;
const DASH = [4, 3];
const COMMON_LETTER_PX = 13;
/** A bay must be this many times as wide as large lettering. */
const MOST_COVERED = 2.4;

export type BaySize = 'large' | 'small' | 'strip';
export function sizeOf(shortPx: number): BaySize {
	if (shortPx >= LARGE_PX) return 'large';
	return shortPx >= SMALL_PX ? 'small' : 'strip';
}

export interface SeenBay {
	bay: PlacedBay;
	corners: readonly Xy[];
	shown: BayMark;
}

/** Section hatching, bare outline, dashed with `?`, crossed out, one diagonal with the word. */
export function drawLarge(
	pen: Pen,
	seen: readonly SeenBay[],
	view: View,
	letterLeastPx: number
): void {
	const of = (mark: Mark) => seen.filter(({ shown }) => shown.mark === mark && !shown.faded);
	const outline = (list: readonly SeenBay[]) => list.map(({ corners }) => closedPath(corners));
	pen.fill(outline(of('taken')), 'hatching');
	pen.stroke(outline(seen.filter(({ shown }) => shown.faded)), { ink: 'hair', width: 0.7 });
	pen.stroke(outline(of('taken')), { ink: 'ink', width: 1.4 });
	pen.stroke(outline([...of('free'), ...of('closed'), ...of('withdrawn')]), {
		ink: 'ink',
		width: 1
	});
	pen.stroke(
		// Inside its own outline: a neighbour's solid line would hide the dashes.
		of('unknown').map(({ corners }) => closedPath(inset(corners, 2.5))),
		{ ink: 'ink', width: 1.2, dash: DASH }
	);
	pen.stroke([...of('closed').map(diagonal), ...of('withdrawn').flatMap(cross)], {
		ink: 'ink',
		width: 1
	});
	for (const one of seen) letter(pen, one, view, letterLeastPx);
}

/** Solid, outline, half-filled corner to corner, crossed out. */
export function drawSmall(pen: Pen, seen: readonly SeenBay[]): void {
	const of = (mark: Mark) => seen.filter(({ shown }) => shown.mark === mark && !shown.faded);
	const outline = (list: readonly SeenBay[]) => list.map(({ corners }) => closedPath(corners));
	pen.fill(outline(of('taken')), 'ink-2');
	pen.fill(of('unknown').map(halfOf), 'ink-2');
	pen.stroke(outline(seen.filter(({ shown }) => shown.faded)), { ink: 'hair', width: 0.7 });
	pen.stroke(outline(seen.filter(({ shown }) => !shown.faded)), { ink: 'ink', width: 0.8 });
	pen.stroke([...of('withdrawn').flatMap(cross), ...of('closed').map(diagonal)], {
		ink: 'ink',
		width: 0.8
	});
}

/** One strip a row: filled length = taken, dashed length = not known, the rest an outline. */
export function drawStrip(pen: Pen, row: readonly SeenBay[], view: View): void {
	const [first, last] = [row[0], row.at(-1)];
	if (first === undefined || last === undefined) return;
	const half = (first.bay.shortM / 2) * view.scale;
	const [a, b] = [toScreen(view, first.bay.centre), toScreen(view, last.bay.centre)];
	const length = Math.hypot(b.x - a.x, b.y - a.y);
	const along =
		length < 0.01 ? { x: 1, y: 0 } : { x: (b.x - a.x) / length, y: (b.y - a.y) / length };
	const start = { x: a.x - along.x * half, y: a.y - along.y * half };
	const whole = length + 2 * half;
	const thick = Math.max(2, Math.min(5, (first.bay.longM / 2) * view.scale * 0.7));
	const at = (share: number, side: number): Xy => ({
		x: start.x + along.x * whole * share - along.y * side,
		y: start.y + along.y * whole * share + along.x * side
	});
	const band = (from: number, to: number) =>
		closedPath([at(from, -thick), at(to, -thick), at(to, thick), at(from, thick)]);
	const share = (mark: Mark) =>
		row.filter(({ shown }) => shown.mark === mark && !shown.faded).length / row.length;
	const [taken, unknown] = [share('taken'), share('unknown')];
	if (taken > 0) pen.fill([band(0, taken)], 'ink-2');
	pen.stroke([band(0, 1)], { ink: 'ink', width: 0.8 });
	if (unknown > 0)
		pen.stroke([line(at(taken, 0), at(taken + unknown, 0))], {
			ink: 'ink',
			width: 1.6,
			dash: [3, 2]
		});
}

function inset(corners: readonly Xy[], px: number): Xy[] {
	const centre = middleOf(corners);
	return corners.map((c) => {
		const length = Math.hypot(c.x - centre.x, c.y - centre.y);
		const share = Math.max(0.5, 1 - (px * Math.SQRT2) / Math.max(1, length));
		return { x: centre.x + (c.x - centre.x) * share, y: centre.y + (c.y - centre.y) * share };
	});
}

export const middleOf = (corners: readonly Xy[]): Xy =>
	corners.reduce(
		(sum, c) => ({ x: sum.x + c.x / corners.length, y: sum.y + c.y / corners.length }),
		{ x: 0, y: 0 }
	);

const diagonal = ({ corners }: SeenBay): Path => line(...pick(corners, 0, 2));
const cross = ({ corners }: SeenBay): Path[] => [
	line(...pick(corners, 0, 2)),
	line(...pick(corners, 1, 3))
];
const halfOf = ({ corners }: SeenBay): Path => closedPath(pick(corners, 0, 1, 2));
const pick = (corners: readonly Xy[], ...at: number[]): Xy[] =>
	at.map((i) => corners[i]).filter((c) => c !== undefined);

/** Code, `?`, the word and what it last was, where they fit into the bay's own outline. */
function letter(pen: Pen, { bay, corners, shown }: SeenBay, view: View, leastPx: number): void {
	const [shortPx, longPx] = [bay.shortM * view.scale, bay.longM * view.scale];
	const centre = middleOf(corners);
	const sizePx = Math.min(Math.max(13, leastPx), Math.max(leastPx, shortPx * 0.3));
	const level = upright(bay.longAngle);
	// Letters lie along the long side where they don't fit across.
	const across = Math.abs(Math.sin(level)) > 0.7 && textWidth(bay.code, sizePx) <= shortPx - 5;
	const angle = across || Math.abs(level) < 0.2 ? 0 : level;
	// Lettering that would hide the state is left out: what a bay is comes before what it is called.
	if (leastPx > COMMON_LETTER_PX && shortPx < sizePx * MOST_COVERED) return;
	const lines = linesOf(bay, shown);
	const room = angle === 0 && Math.abs(Math.sin(level)) > 0.7 ? shortPx : longPx;
	const depth = angle === 0 && Math.abs(Math.sin(level)) > 0.7 ? longPx : shortPx;
	const fitting = lines
		.filter(({ text }) => textWidth(text, sizePx) <= room - 4)
		.slice(0, Math.max(0, Math.floor((depth - 2) / (sizePx * 1.25))));
	const [sin, cos] = [Math.sin(angle), Math.cos(angle)];
	fitting.forEach(({ text, ink }, at) => {
		const down = (at - (fitting.length - 1) / 2) * sizePx * 1.25;
		pen.text(
			text,
			{ x: centre.x - sin * down, y: centre.y + cos * down },
			{
				ink: shown.faded ? 'ink-2' : ink,
				sizePx,
				bold: text === '?',
				align: 'centre',
				angle,
				cleared: true
			}
		);
	});
}

function linesOf(bay: PlacedBay, shown: BayMark): { text: string; ink: 'ink' | 'ink-2' }[] {
	const code = { text: bay.code, ink: 'ink' as const };
	if (shown.faded) return [code];
	if (shown.mark === 'closed') return [code, { text: 'closed', ink: 'ink' }];
	if (shown.mark !== 'unknown') return [code];
	const asked = { text: '?', ink: 'ink' as const };
	const was = shown.wasText === null ? [] : [{ text: shown.wasText, ink: 'ink-2' as const }];
	return [code, asked, ...was];
}

/** An angle of lettering that is never upside down, in (-π/2, π/2]. */
const upright = (angle: number) => (angle > Math.PI / 2 ? angle - Math.PI : angle);
