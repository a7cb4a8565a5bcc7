/** One curve of a plot; `null` values are gaps and are drawn as gaps. */
export interface Curve {
	label: string;
	values: readonly (number | null)[];
	/** Dash pattern in px; none is a full line. */
	dash?: readonly number[];
	width?: number;
	/** Lower and upper edge of a band of min and max around the curve. */
	band?: { min: readonly (number | null)[]; max: readonly (number | null)[] };
}
/** Drawn dash-dot, with its text on it. */
export interface Threshold {
	value: number;
	text: string;
}
export interface PlotEvent {
	atS: number;
	text: string;
}
