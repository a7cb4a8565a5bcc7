import type { Xy } from './types';

/** Inks by role; the colours come from the theme (canvas) or are black on white (print). */
export type Ink = 'ink' | 'ink-2' | 'hatch' | 'hair' | 'accent' | 'paper';
export type Fill = Ink | 'hatching';

export interface Stroke {
	ink: Ink;
	/** Line weight in px: 0.7 fine, 1 thin, 1.4 medium, 2 bold. */
	width: number;
	dash?: readonly number[];
}
export interface Lettering {
	ink: Ink;
	sizePx: number;
	bold?: boolean;
	align?: 'left' | 'centre' | 'right';
	/** Radians, clockwise. */
	angle?: number;
	/** Clears the ground behind the letters so that they stand free of hatching. */
	cleared?: boolean;
}
/** A run of points; closed ones are outlines. */
export interface Path {
	points: readonly Xy[];
	closed: boolean;
}

/** What a drawing needs; canvas and SVG each have one. All lengths are in px of the sheet. */
export interface Pen {
	/** Many paths of one kind at once: this is what keeps 2,000 bays fast. */
	fill(paths: readonly Path[], fill: Fill): void;
	stroke(paths: readonly Path[], stroke: Stroke): void;
	text(text: string, at: Xy, lettering: Lettering): void;
}

/** Advance of every letter of the sheet's typeface, in em. */
export const ADVANCE_EM = 0.6;
export const textWidth = (text: string, sizePx: number) => text.length * ADVANCE_EM * sizePx;

export const closedPath = (points: readonly Xy[]): Path => ({ points, closed: true });
export const line = (...points: Xy[]): Path => ({ points, closed: false });
