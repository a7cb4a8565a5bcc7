import type uPlot from 'uplot';
import type { PlotInks } from '$lib/ui/plot-options';
import { celsius, milligauss } from '$lib/format/field';

export interface Scatter {
	/** Rising. */
	tempC: number[];
	fieldMg: number[];
	/** Slope line through the middle of the points; null: slope not known. */
	lineMg: number[] | null;
	slopePerC: number | null;
	errorPerC: number | null;
}

type Point = readonly [number, number, number, number];

/** One axis of field plus offset over temperature, with the slope that the triples gave. */
export function scatterOf(
	points: readonly Point[],
	slope: { perC: readonly number[]; errorPerC: readonly number[] } | null,
	axis: 0 | 1 | 2
): Scatter {
	const sorted = points.map((p) => [p[0], p[axis + 1] ?? 0] as const).sort((a, b) => a[0] - b[0]);
	const tempC = sorted.map(([t]) => t);
	const fieldMg = sorted.map(([, mg]) => mg);
	const slopePerC = slope?.perC[axis] ?? null;
	const rest = slopePerC === null ? [] : sorted.map(([t, mg]) => mg - slopePerC * t);
	const at = median(rest);
	return {
		tempC,
		fieldMg,
		lineMg: slopePerC === null ? null : tempC.map((t) => at + slopePerC * t),
		slopePerC,
		errorPerC: slope?.errorPerC[axis] ?? null
	};
}

function median(values: readonly number[]): number {
	const sorted = [...values].sort((a, b) => a - b);
	const middle = sorted.length >> 1;
	const upper = sorted[middle] ?? 0;
	return sorted.length % 2 === 1 ? upper : ((sorted[middle - 1] ?? upper) + upper) / 2;
}

const LETTER = "11px 'JetBrains Mono', monospace";

export function scatterOptions(
	{ tempC, fieldMg, lineMg }: Scatter,
	inks: PlotInks,
	size: { width: number; height: number },
	oncursor: (index: number | null) => void
): { options: uPlot.Options; data: uPlot.AlignedData } {
	const axis = {
		stroke: inks.faint,
		font: LETTER,
		grid: { stroke: inks.hair, width: 0.5 },
		ticks: { stroke: inks.hair, width: 1, size: 5 }
	};
	return {
		options: {
			...size,
			scales: { x: { time: false, range: (_p, from, to) => [from - 1, to + 1] } },
			series: [
				{},
				{
					stroke: inks.ink,
					paths: () => null,
					points: { show: true, size: 4, width: 1, stroke: inks.ink, fill: 'transparent' }
				},
				{ stroke: inks.ink, width: 1.4, points: { show: false } }
			],
			axes: [
				{
					...axis,
					space: 50,
					values: (_p, ticks) => ticks.map((t) => celsius(t).replace(/([.,]0)? °C/, ''))
				},
				{
					...axis,
					size: 58,
					space: 18,
					values: (_p, ticks) => ticks.map((v) => milligauss(v).replace(' mG', ''))
				}
			],
			cursor: { drag: { x: false, y: false }, points: { show: false } },
			hooks: { setCursor: [(plot) => oncursor(plot.cursor.idx ?? null)] }
		},
		data: [tempC, fieldMg, lineMg ?? tempC.map(() => null)]
	};
}
