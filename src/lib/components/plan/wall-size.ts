/**
 * Sizes for reading at 2 m (issue 4, 'Wall'): lines at least 0.6 mm wide, capitals at least 12 mm high. The
 * drawing is made in units whose thinnest line is 0.7 wide, as on the desk's screen.
 */
const LEAST_LINE_MM = 0.6;
const LEAST_CAPITAL_MM = 12;
/** The thinnest line of the drawing (pen.ts, Stroke). */
const THINNEST_UNITS = 0.7;
/** Height of a capital of JetBrains Mono, of 1 em (OS/2 table: 730 of 1000). */
const CAPITAL_EM = 0.73;
/** CSS Values 4: 96 px make a nominal inch; a screen is what its ruler says. */
export const NOMINAL_PX_PER_MM = 96 / 25.4;

/** CSS px of one unit of the drawing on a screen of that many px a mm. */
export const unitPx = (pxPerMm: number): number => (LEAST_LINE_MM / THINNEST_UNITS) * pxPerMm;

/** Size of lettering whose capitals are 12 mm high, in mm. */
export const LETTER_MM = LEAST_CAPITAL_MM / CAPITAL_EM;

/** The same in units of the drawing. */
export const LETTER_UNITS = LETTER_MM / (LEAST_LINE_MM / THINNEST_UNITS);
