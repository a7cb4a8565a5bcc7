import type { Fill, Ink, Path, Pen } from './pen';
import { textWidth } from './pen';

const BLACK_ON_WHITE: Record<Ink, string> = {
	ink: '#000',
	'ink-2': '#333',
	hatch: '#7f7f7f',
	hair: '#9a9a9a',
	accent: '#000',
	paper: '#fff'
};
const n = (v: number) => String(Math.round(v * 100) / 100);
const escaped = (text: string) =>
	text.replaceAll('&', '&amp;').replaceAll('<', '&lt;').replaceAll('>', '&gt;');

/**
 * Draws the same plan as SVG, in ink on white: for print. `take` gives the markup. Two drawings in one
 * document need names of their own for the hatching.
 */
export function svgPen(name = 'section'): Pen & { take(): string } {
	const parts: string[] = [
		`<defs><pattern id="${name}" width="6" height="6" patternUnits="userSpaceOnUse" patternTransform="rotate(45)"><path d="M0 0v6" stroke="#555" stroke-width="1"/></pattern></defs>`
	];
	const d = (paths: readonly Path[]) =>
		paths
			.map(
				({ points, closed }) =>
					`M${points.map((p) => `${n(p.x)} ${n(p.y)}`).join('L')}${closed ? 'Z' : ''}`
			)
			.join('');
	const paint = (fill: Fill) => (fill === 'hatching' ? `url(#${name})` : BLACK_ON_WHITE[fill]);
	return {
		fill(paths, fill) {
			if (paths.length > 0) parts.push(`<path d="${d(paths)}" fill="${paint(fill)}"/>`);
		},
		stroke(paths, { ink, width, dash }) {
			if (paths.length === 0) return;
			const dashes = dash === undefined ? '' : ` stroke-dasharray="${dash.join(' ')}"`;
			parts.push(
				`<path d="${d(paths)}" fill="none" stroke="${BLACK_ON_WHITE[ink]}" stroke-width="${n(width)}"${dashes}/>`
			);
		},
		text(text, at, { ink, sizePx, bold, align = 'left', angle = 0, cleared }) {
			const anchor = { left: 'start', centre: 'middle', right: 'end' }[align];
			const turn = `translate(${n(at.x)} ${n(at.y)}) rotate(${n((angle * 180) / Math.PI)})`;
			const width = textWidth(text, sizePx) + 4;
			const left = align === 'centre' ? -width / 2 : align === 'right' ? -width + 2 : -2;
			const ground =
				cleared === true
					? `<rect x="${n(left)}" y="${n(-sizePx * 0.62)}" width="${n(width)}" height="${n(sizePx * 1.2)}" fill="#fff"/>`
					: '';
			parts.push(
				`<g transform="${turn}">${ground}<text text-anchor="${anchor}" dy="0.35em" font-size="${n(sizePx)}" font-weight="${bold === true ? 600 : 400}" fill="${BLACK_ON_WHITE[ink]}">${escaped(text)}</text></g>`
			);
		},
		take: () => parts.join('')
	};
}
