import type { PartKey } from './stack';

/** How a part is filled: told apart by drafting pattern, never by colour. */
export type Tone = 'blank' | 'levels' | 'uprights' | 'dots' | 'hatch' | 'solid';

export const TONES: Readonly<Record<PartKey, Tone>> = {
	temperatureMg: 'blank',
	geomagneticMg: 'levels',
	bridgeMg: 'uprights',
	filmMg: 'dots',
	surroundingsMg: 'hatch',
	unexplainedMg: 'solid'
};

const SIDE_PX = 7;

/** The tile of a tone, lines of an SVG path on a square of `SIDE_PX`. */
const LINES: Readonly<Record<Tone, string>> = {
	blank: '',
	levels: `M0 3.5H${SIDE_PX}`,
	uprights: `M3.5 0V${SIDE_PX}`,
	dots: 'M3.5 3.5h.01',
	hatch: 'M-1 8 8 -1',
	solid: ''
};
export const tonePath = (tone: Tone): string => LINES[tone];
export const TONE_SIDE_PX = SIDE_PX;

/** What a canvas fills a band with. */
export function toneFill(
	context: CanvasRenderingContext2D,
	tone: Tone,
	ink: string,
	ratio: number
): string | CanvasPattern {
	if (tone === 'blank') return 'transparent';
	if (tone === 'solid') return `color-mix(in srgb, ${ink} 62%, transparent)`;
	const tile = document.createElement('canvas');
	tile.width = tile.height = Math.round(SIDE_PX * ratio);
	const draw = tile.getContext('2d');
	if (draw === null) return ink;
	draw.scale(ratio, ratio);
	draw.strokeStyle = ink;
	draw.lineWidth = tone === 'dots' ? 2.4 : 1;
	draw.lineCap = tone === 'dots' ? 'round' : 'butt';
	draw.stroke(new Path2D(LINES[tone]));
	return context.createPattern(tile, 'repeat') ?? ink;
}
