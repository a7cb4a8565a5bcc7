import type { Fill, Ink, Lettering, Path, Pen, Stroke } from './pen';
import { textWidth } from './pen';
import type { Xy } from './types';

export type Palette = Record<Ink, string>;
const INKS: readonly Ink[] = ['ink', 'ink-2', 'hatch', 'hair', 'accent', 'paper'];
const FAMILY = "'JetBrains Mono', 'Mono Stand-in', ui-monospace, monospace";

/** The colours in force; under forced colours these are the system's. */
export function paletteOf(element: Element): Palette {
	const style = getComputedStyle(element);
	return Object.fromEntries(
		INKS.map((ink) => [ink, style.getPropertyValue(`--${ink}`).trim()])
	) as Palette;
}

export interface CanvasSetting {
	palette: Palette;
	/** Device pixels a CSS pixel. */
	ratio: number;
	/** Where the page's origin is, so that hatching moves with the page and does not swim. */
	origin: Xy;
	/** A plain tone instead of stripes. */
	plainTone: boolean;
}

export function canvasPen(context: CanvasRenderingContext2D, setting: CanvasSetting): Pen {
	const { palette } = setting;
	const paint = (fill: Fill) => (fill === 'hatching' ? hatching(context, setting) : palette[fill]);
	return {
		fill(paths, fill) {
			context.fillStyle = paint(fill);
			trace(context, paths);
			context.fill();
		},
		stroke(paths, { ink, width, dash }: Stroke) {
			context.strokeStyle = palette[ink];
			context.lineWidth = width;
			context.setLineDash(dash === undefined ? [] : [...dash]);
			trace(context, paths);
			context.stroke();
		},
		text(text, at, lettering) {
			write(context, palette, text, at, lettering);
		}
	};
}

function trace(context: CanvasRenderingContext2D, paths: readonly Path[]): void {
	context.beginPath();
	for (const { points, closed } of paths) {
		points.forEach(({ x, y }, at) => (at === 0 ? context.moveTo(x, y) : context.lineTo(x, y)));
		if (closed) context.closePath();
	}
}

function write(
	context: CanvasRenderingContext2D,
	palette: Palette,
	text: string,
	at: Xy,
	lettering: Lettering
): void {
	const { ink, sizePx, bold, align = 'left', angle = 0, cleared } = lettering;
	context.save();
	context.translate(at.x, at.y);
	context.rotate(angle);
	context.font = `${bold === true ? 600 : 400} ${sizePx}px ${FAMILY}`;
	context.textAlign = align === 'centre' ? 'center' : align;
	context.textBaseline = 'middle';
	if (cleared === true) {
		const width = textWidth(text, sizePx) + 4;
		const left = align === 'centre' ? -width / 2 : align === 'right' ? -width + 2 : -2;
		context.fillStyle = palette.paper;
		context.fillRect(left, -sizePx * 0.62, width, sizePx * 1.2);
	}
	context.fillStyle = palette[ink];
	context.fillText(text, 0, 0.5);
	context.restore();
}

const tiles = new Map<string, HTMLCanvasElement>();

/** Stripes at 45°, at least 5 CSS px apart, drawn in device pixels so that they stay crisp. */
function hatching(context: CanvasRenderingContext2D, setting: CanvasSetting) {
	const { palette, ratio, origin, plainTone } = setting;
	if (plainTone) return `color-mix(in srgb, ${palette.hatch} 55%, ${palette.paper})`;
	const side = Math.round(8 * ratio);
	const key = `${palette.hatch} ${side}`;
	let tile = tiles.get(key);
	if (tile === undefined) {
		tile = document.createElement('canvas');
		tile.width = tile.height = side;
		const draw = tile.getContext('2d');
		if (draw !== null) {
			draw.strokeStyle = palette.hatch;
			draw.lineWidth = Math.max(1, ratio);
			draw.beginPath();
			for (const shift of [-side, 0, side]) {
				draw.moveTo(shift - 2, side + 2);
				draw.lineTo(shift + side + 2, -2);
			}
			draw.stroke();
		}
		if (tiles.size > 8) tiles.clear();
		tiles.set(key, tile);
	}
	const pattern = context.createPattern(tile, 'repeat');
	if (pattern === null) return palette.hatch;
	pattern.setTransform(
		new DOMMatrix().translate(Math.round(origin.x), Math.round(origin.y)).scale(1 / ratio)
	);
	return pattern;
}
