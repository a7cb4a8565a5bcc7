import type uPlot from 'uplot';
import type { PlotInks } from '$lib/ui/plot-options';
import { milligauss } from '$lib/format/field';
import { words } from '$lib/format/messages';
import type { Stack } from './stack';
import { toneFill, TONES } from './tones';

interface Wanted {
	inks: PlotInks;
	size: { width: number; height: number };
	stack: Stack;
	timezone: string;
	ratio: number;
	/** Plots of one group share their cursor. */
	group: string;
	oncursor: (index: number | null) => void;
}

const LETTER = "11px 'JetBrains Mono', monospace";
const AXIS_PX = 58;
const bare = (mg: number) => milligauss(mg).replace(' mG', '');

/** uPlot options and data of the stack: a band from each part's edge to the edge before it, and the total. */
export function partsOptions({ inks, size, stack, timezone, ratio, group, oncursor }: Wanted): {
	options: uPlot.Options;
	data: uPlot.AlignedData;
} {
	const zero = stack.timesS.map((_, at) => (stack.totalMg[at] === null ? null : 0));
	const edge = { stroke: inks.hatch, width: 0.6, spanGaps: false, points: { show: false } };
	const series: uPlot.Series[] = [{}, edge];
	const columns: (number | null)[][] = [zero];
	const bands: uPlot.Band[] = [];
	for (const side of ['above', 'below'] as const) {
		let before = 1;
		for (const part of stack.parts) {
			series.push(edge);
			columns.push(part[side]);
			const here = series.length - 1;
			bands.push({
				series: side === 'above' ? [here, before] : [before, here],
				fill: (plot: uPlot) => toneFill(plot.ctx, TONES[part.key], inks.ink, ratio)
			});
			before = here;
		}
	}
	series.push({ stroke: inks.ink, width: 2, spanGaps: false, points: { show: false } });
	columns.push(stack.totalMg);
	const axis = {
		stroke: inks.faint,
		font: LETTER,
		grid: { stroke: inks.hair, width: 0.5 },
		ticks: { stroke: inks.hair, width: 1, size: 5 }
	};
	const day = new Intl.DateTimeFormat(words().locale, {
		timeZone: timezone,
		day: 'numeric',
		month: 'short'
	});
	const hour = new Intl.DateTimeFormat(words().locale, {
		timeZone: timezone,
		hour: '2-digit',
		minute: '2-digit'
	});
	return {
		options: {
			...size,
			series,
			bands,
			scales: { x: { time: true }, y: { range: (_plot, least, most) => room(least, most) } },
			axes: [
				{
					...axis,
					space: 74,
					values: (_plot, ticks, _axis, _space, stepS) =>
						ticks.map((tick) => (stepS >= 86_400 ? day : hour).format(tick * 1000))
				},
				{ ...axis, size: AXIS_PX, space: 18, values: (_plot, ticks) => ticks.map(bare) }
			],
			cursor: {
				sync: { key: group, setSeries: false },
				drag: { x: false, y: false },
				points: { show: false }
			},
			hooks: { setCursor: [(plot) => oncursor(plot.cursor.idx ?? null)] }
		},
		data: [[...stack.timesS], ...columns] as uPlot.AlignedData
	};
}

function room(least: number | null, most: number | null): [number, number] {
	const [low, high] = [Math.min(0, least ?? 0), Math.max(0, most ?? 1)];
	const pad = Math.max(1, (high - low) * 0.08);
	return [low < 0 ? low - pad : 0, high + pad];
}
