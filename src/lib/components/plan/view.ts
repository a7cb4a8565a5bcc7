import type { Box, PlacedBay, Xy } from './types';

/** How the page lies on the screen: pixels a metre, and where the page's origin is in pixels. */
export interface View {
	scale: number;
	x: number;
	y: number;
}
export interface Size {
	width: number;
	height: number;
}

/** Width of the band along the border that carries the metre marks. */
export const BORDER_PX = 24;
const MARGIN_PX = 18;
const SCALE_LIMITS = { least: 0.2, most: 120 } as const;
/** Nominal size of a CSS pixel (CSS Values 4: 1 in = 96 px), for the scale that the title block states. */
const PIXEL_M = 0.0254 / 96;

export const toScreen = (view: View, p: Xy): Xy => ({
	x: p.x * view.scale + view.x,
	y: p.y * view.scale + view.y
});
export const toPage = (view: View, p: Xy): Xy => ({
	x: (p.x - view.x) / view.scale,
	y: (p.y - view.y) / view.scale
});

/** The largest view that shows a box whole; a single bay is not blown up past `mostScale`. */
export function fit(box: Box, size: Size, mostScale: number = SCALE_LIMITS.most): View {
	const inset = BORDER_PX + MARGIN_PX;
	const [room, height] = [
		Math.max(40, size.width - 2 * inset),
		Math.max(40, size.height - 2 * inset)
	];
	const [w, h] = [Math.max(1, box.maxX - box.minX), Math.max(1, box.maxY - box.minY)];
	const scale = clampScale(Math.min(room / w, height / h, mostScale));
	return {
		scale,
		x: size.width / 2 - ((box.minX + box.maxX) / 2) * scale,
		y: size.height / 2 - ((box.minY + box.maxY) / 2) * scale
	};
}

const clampScale = (scale: number) =>
	Math.min(SCALE_LIMITS.most, Math.max(SCALE_LIMITS.least, scale));

/** Zooms by a factor; the page point under `at` stays where it is. */
export function zoomAt(view: View, at: Xy, factor: number): View {
	const scale = clampScale(view.scale * factor);
	const share = scale / view.scale;
	return { scale, x: at.x - (at.x - view.x) * share, y: at.y - (at.y - view.y) * share };
}

/** Moves the page, but never wholly out of sight. */
export function panned(view: View, dx: number, dy: number, box: Box, size: Size): View {
	const keep = 60;
	const bound = (at: number, from: number, to: number, room: number) =>
		Math.min(room - keep - from * view.scale, Math.max(keep - to * view.scale, at));
	return {
		scale: view.scale,
		x: bound(view.x + dx, box.minX, box.maxX, size.width),
		y: bound(view.y + dy, box.minY, box.maxY, size.height)
	};
}

/** Moves as little as needed to bring a bay well inside the drawing. */
export function revealing(view: View, bay: PlacedBay, size: Size): View {
	const at = toScreen(view, bay.centre);
	const inset = Math.min(BORDER_PX + 40, size.width / 3, size.height / 3);
	const shift = (v: number, room: number) =>
		v < inset ? inset - v : v > room - inset ? room - inset - v : 0;
	return { ...view, x: view.x + shift(at.x, size.width), y: view.y + shift(at.y, size.height) };
}

/** Centred on a bay, large enough for its details. */
export function ontoBay(view: View, bay: PlacedBay, size: Size, shortPx = 56): View {
	const scale = clampScale(Math.max(view.scale, shortPx / bay.shortM));
	return {
		scale,
		x: size.width / 2 - bay.centre.x * scale,
		y: size.height / 2 - bay.centre.y * scale
	};
}

/** The n of '1 : n', to two figures. */
export function scaleNumber(view: View): number {
	const n = 1 / (view.scale * PIXEL_M);
	const power = 10 ** Math.max(0, Math.floor(Math.log10(n)) - 1);
	return Math.round(n / power) * power;
}

/** A length in metres of the 1-2-5 series that takes at least `leastPx` on screen. */
export function stepM(scale: number, leastPx: number): number {
	const raw = leastPx / scale;
	const power = 10 ** Math.floor(Math.log10(raw));
	return [1, 2, 5, 10].map((m) => m * power).find((step) => step >= raw) ?? 10 * power;
}
