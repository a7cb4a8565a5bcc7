import type { PlotTable } from './plot-save';

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

/** What a plot over time shows within a span, as rows to save: time in UTC, each curve, its band. */
export function shownTable(
	timesS: readonly number[],
	curves: readonly Curve[],
	[fromS, toS]: readonly [number, number]
): PlotTable {
	const columns = curves.flatMap(({ label, values, band }) => [
		[label, values] as const,
		...(band === undefined
			? []
			: [[`${label} min`, band.min] as const, [`${label} max`, band.max] as const])
	]);
	return {
		head: ['time_utc', ...columns.map(([label]) => label)],
		rows: timesS.flatMap((atS, at) =>
			atS < fromS || atS > toS
				? []
				: [[new Date(atS * 1000).toISOString(), ...columns.map(([, of]) => of[at] ?? null)]]
		)
	};
}
