import type { Raster } from './png';

/** Indexes into the palette of a plot: ink on paper. */
export const PAPER = 0;
export const HAIR = 1;
export const INK_2 = 2;
export const INK = 3;
const PALETTE = [
	[0xfa, 0xf6, 0xec],
	[0xb8, 0xae, 0x9c],
	[0x5b, 0x52, 0x47],
	[0x21, 0x1c, 0x16]
] as const;

/** Rows of 5 pixels, drawn by hand; what labels of a plot need. */
const GLYPHS: Record<string, readonly string[]> = {
	'0': ['.###.', '#...#', '#..##', '#.#.#', '##..#', '#...#', '.###.'],
	'1': ['..#..', '.##..', '..#..', '..#..', '..#..', '..#..', '.###.'],
	'2': ['.###.', '#...#', '....#', '...#.', '..#..', '.#...', '#####'],
	'3': ['.###.', '#...#', '....#', '..##.', '....#', '#...#', '.###.'],
	'4': ['...#.', '..##.', '.#.#.', '#..#.', '#####', '...#.', '...#.'],
	'5': ['#####', '#....', '####.', '....#', '....#', '#...#', '.###.'],
	'6': ['..##.', '.#...', '#....', '####.', '#...#', '#...#', '.###.'],
	'7': ['#####', '....#', '...#.', '..#..', '..#..', '..#..', '..#..'],
	'8': ['.###.', '#...#', '#...#', '.###.', '#...#', '#...#', '.###.'],
	'9': ['.###.', '#...#', '#...#', '.####', '....#', '...#.', '.##..'],
	'-': ['.....', '.....', '.....', '#####', '.....', '.....', '.....'],
	'.': ['.....', '.....', '.....', '.....', '.....', '.##..', '.##..'],
	m: ['.....', '.....', '##.#.', '#.#.#', '#.#.#', '#.#.#', '#.#.#'],
	G: ['.###.', '#...#', '#....', '#.###', '#...#', '#...#', '.###.'],
	d: ['....#', '....#', '.####', '#...#', '#...#', '#...#', '.####'],
	n: ['.....', '.....', '####.', '#...#', '#...#', '#...#', '#...#'],
	o: ['.....', '.....', '.###.', '#...#', '#...#', '#...#', '.###.'],
	w: ['.....', '.....', '#...#', '#.#.#', '#.#.#', '#.#.#', '.#.#.'],
	e: ['.....', '.....', '.###.', '#...#', '#####', '#....', '.###.'],
	j: ['...#.', '.....', '..##.', '...#.', '...#.', '#..#.', '.##..'],
	t: ['.#...', '.#...', '####.', '.#...', '.#...', '.#..#', '..##.'],
	z: ['.....', '.....', '#####', '...#.', '..#..', '.#...', '#####'],
	' ': ['.....', '.....', '.....', '.....', '.....', '.....', '.....']
};
const ADVANCE = 6;
/** Pixels on and off along a dash-dot line. */
const DASH_DOT = [10, 4, 2, 4];

/** A pen over a raster; everything outside is cut off. */
export class Pen {
	readonly raster: Raster;

	constructor(width: number, height: number) {
		this.raster = { width, height, pixels: new Uint8Array(width * height), palette: PALETTE };
	}

	dot(x: number, y: number, ink: number, size = 1): void {
		const { width, height, pixels } = this.raster;
		const [left, top] = [Math.round(x - (size - 1) / 2), Math.round(y - (size - 1) / 2)];
		for (let v = Math.max(0, top); v < Math.min(height, top + size); v += 1)
			for (let u = Math.max(0, left); u < Math.min(width, left + size); u += 1)
				pixels[v * width + u] = ink;
	}

	line(
		from: readonly [number, number],
		to: readonly [number, number],
		ink: number,
		size = 1
	): void {
		const steps = Math.ceil(Math.max(Math.abs(to[0] - from[0]), Math.abs(to[1] - from[1]), 1));
		for (let i = 0; i <= steps; i += 1) {
			const share = i / steps;
			this.dot(from[0] + (to[0] - from[0]) * share, from[1] + (to[1] - from[1]) * share, ink, size);
		}
	}

	dashDot(y: number, fromX: number, toX: number, ink: number): void {
		let [x, part] = [fromX, 0];
		while (x < toX) {
			const length = DASH_DOT[part % DASH_DOT.length] ?? 1;
			if (part % 2 === 0) this.line([x, y], [Math.min(toX, x + length), y], ink, 2);
			x += length;
			part += 1;
		}
	}

	/** Left upper corner at (x, y); a character without a glyph is left blank. */
	text(words: string, x: number, y: number, ink: number, scale = 2): void {
		[...words].forEach((letter, at) => {
			(GLYPHS[letter] ?? []).forEach((row, v) => {
				[...row].forEach((mark, u) => {
					if (mark === '#')
						this.dot(x + (at * ADVANCE + u) * scale + 0.5, y + v * scale + 0.5, ink, scale);
				});
			});
		});
	}
}

export const textWidth = (words: string, scale = 2): number => words.length * ADVANCE * scale;
