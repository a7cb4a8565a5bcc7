import { words } from '$lib/format/messages';
import type uPlot from 'uplot';
import type { Curve, PlotEvent, Threshold } from './plot-types';

interface Wanted {
	inks: PlotInks;
	size: { width: number; height: number };
	curves: readonly Curve[];
	thresholds: readonly Threshold[];
	events: readonly PlotEvent[];
	range: readonly [number, number];
	timezone: string;
	group: string;
	write: (value: number) => string;
	onrange?: ((fromS: number, toS: number) => void) | undefined;
	oncursor: (index: number | null) => void;
}

export interface PlotInks {
	paper: string;
	ink: string;
	faint: string;
	hair: string;
	hatch: string;
}
/** Ink on white. */
export const PRINT_INKS: PlotInks = {
	paper: '#fff',
	ink: '#000',
	faint: '#333',
	hair: '#aaa',
	hatch: '#777'
};

/** The inks of the theme in force. */
export function inksOf(style: CSSStyleDeclaration): PlotInks {
	const ink = (name: string) => style.getPropertyValue(`--${name}`).trim();
	return {
		paper: ink('paper'),
		ink: ink('ink'),
		faint: ink('ink-2'),
		hair: ink('hair'),
		hatch: ink('hatch')
	};
}

const LETTER = "11px 'JetBrains Mono', monospace";
/** Dash-dot, as drafting draws limits. */
const DASH_DOT = [10, 3, 2, 3];
const AXIS_PX = 58;

/** Options and data for uPlot from what a plot is to show. */
export function plotOptions(wanted: Wanted): {
	options: uPlot.Options;
	dataOf: (timesS: readonly number[]) => uPlot.AlignedData;
} {
	const { inks, size, curves, range } = wanted;
	const bands: uPlot.Band[] = [];
	const series: uPlot.Series[] = [{}];
	const columns: (readonly (number | null)[])[] = [];
	for (const curve of curves) {
		series.push({
			label: curve.label,
			stroke: inks.ink,
			width: curve.width ?? 1.2,
			dash: [...(curve.dash ?? [])],
			spanGaps: false,
			points: { show: false }
		});
		columns.push(curve.values);
		if (curve.band === undefined) continue;
		series.push({ stroke: 'transparent', points: { show: false } });
		series.push({ stroke: 'transparent', points: { show: false } });
		columns.push(curve.band.max, curve.band.min);
		bands.push({
			series: [series.length - 2, series.length - 1],
			fill: `color-mix(in srgb, ${inks.hatch} 33%, transparent)`
		});
	}
	const options: uPlot.Options = {
		...size,
		series,
		bands,
		tzDate: (seconds) => zoned(seconds, wanted.timezone),
		scales: {
			x: { time: true, range: () => [...range] },
			y: { range: (_plot, least, most) => room(least, most, wanted.thresholds) }
		},
		axes: [
			{
				...axis(inks),
				space: 74,
				values: (_plot, ticks, _axis, _space, stepS) => timeLabels(ticks, stepS, wanted.timezone)
			},
			{
				...axis(inks),
				size: AXIS_PX,
				// Also a plot of 130 px has three values to read by.
				space: 18,
				values: (_plot, ticks) => ticks.map((v) => wanted.write(v))
			}
		],
		cursor: {
			sync: { key: wanted.group, setSeries: false },
			drag: { x: wanted.onrange !== undefined, y: false, setScale: false },
			points: { size: 6, fill: inks.ink }
		},
		hooks: {
			drawClear: [(plot) => drawEvents(plot, wanted.events, inks)],
			draw: [(plot) => drawThresholds(plot, wanted.thresholds, inks)],
			setSelect: [(plot) => selected(plot, wanted.onrange ?? (() => undefined))],
			setCursor: [(plot) => wanted.oncursor(plot.cursor.idx ?? null)]
		}
	};
	return {
		options,
		dataOf: (timesS) => [[...timesS], ...columns.map((column) => [...column])] as uPlot.AlignedData
	};
}

function axis(inks: { faint: string; hair: string }): uPlot.Axis {
	return {
		stroke: inks.faint,
		font: LETTER,
		grid: { stroke: inks.hair, width: 0.5 },
		ticks: { stroke: inks.hair, width: 1, size: 5 }
	};
}

/** Room above and below, thresholds inside, never a flat scale. */
function room(
	least: number | null,
	most: number | null,
	thresholds: readonly Threshold[]
): [number, number] {
	const values = [least ?? 0, most ?? 1, ...thresholds.map(({ value }) => value)];
	const [low, high] = [Math.min(...values), Math.max(...values)];
	const pad = Math.max(1, (high - low) * 0.08);
	return [low - pad, high + pad];
}

function drawThresholds(plot: uPlot, thresholds: readonly Threshold[], inks: PlotInks): void {
	const { ctx } = plot;
	const { left, width } = plot.bbox;
	ctx.save();
	ctx.strokeStyle = ctx.fillStyle = inks.ink;
	ctx.lineWidth = devicePixelRatio;
	ctx.font = `${11 * devicePixelRatio}px 'JetBrains Mono', monospace`;
	ctx.textAlign = 'right';
	let lastY = -Infinity;
	for (const { value, text } of [...thresholds].sort((a, b) => b.value - a.value)) {
		const y = plot.valToPos(value, 'y', true);
		// Two limits close together: the lower one's words go under its line.
		const under = y - lastY < 16 * devicePixelRatio;
		lastY = y;
		ctx.setLineDash(DASH_DOT.map((v) => v * devicePixelRatio));
		ctx.beginPath();
		ctx.moveTo(left, y);
		ctx.lineTo(left + width, y);
		ctx.stroke();
		// Lettering stands on paper: a curve that runs through it would make it unreadable.
		const [wide, textY] = [ctx.measureText(text).width, y + (under ? 12 : -4) * devicePixelRatio];
		ctx.fillStyle = inks.paper;
		ctx.fillRect(
			left + width - 6 - wide,
			textY - 9.5 * devicePixelRatio,
			wide + 4,
			12 * devicePixelRatio
		);
		ctx.fillStyle = inks.ink;
		ctx.fillText(text, left + width - 4, textY);
	}
	ctx.restore();
}

function drawEvents(plot: uPlot, events: readonly PlotEvent[], inks: PlotInks): void {
	const { ctx } = plot;
	const { left, top, width, height } = plot.bbox;
	ctx.save();
	ctx.strokeStyle = ctx.fillStyle = inks.faint;
	ctx.lineWidth = devicePixelRatio * 0.8;
	ctx.setLineDash([2 * devicePixelRatio, 2 * devicePixelRatio]);
	ctx.font = `${10 * devicePixelRatio}px 'JetBrains Mono', monospace`;
	let lastRight = -Infinity;
	for (const { atS, text } of events) {
		const x = plot.valToPos(atS, 'x', true);
		if (x < left || x > left + width) continue;
		ctx.beginPath();
		ctx.moveTo(x, top);
		ctx.lineTo(x, top + height);
		ctx.stroke();
		// Words only where they don't run into each other.
		const wide = text.length * 6 * devicePixelRatio;
		if (x < lastRight + 8 || x + wide > left + width) continue;
		ctx.fillText(text, x + 3 * devicePixelRatio, top + 10 * devicePixelRatio);
		lastRight = x + wide;
	}
	ctx.restore();
}

function selected(plot: uPlot, onrange: (fromS: number, toS: number) => void): void {
	const { left, width } = plot.select;
	if (width < 4) return;
	const [from, to] = [plot.posToVal(left, 'x'), plot.posToVal(left + width, 'x')];
	plot.setSelect({ left: 0, top: 0, width: 0, height: 0 }, false);
	onrange(Math.round(from), Math.round(to));
}

/** A Date whose local parts are the wall time of the zone: what uPlot lays its ticks by. */
function zoned(seconds: number, timezone: string): Date {
	const parts = Object.fromEntries(
		formatter('parts', timezone, {
			year: 'numeric',
			month: '2-digit',
			day: '2-digit',
			hour: '2-digit',
			minute: '2-digit',
			second: '2-digit'
		})
			.formatToParts(seconds * 1000)
			.map((part) => [part.type, Number(part.value)])
	);
	return new Date(
		parts['year'] ?? 1970,
		(parts['month'] ?? 1) - 1,
		parts['day'] ?? 1,
		parts['hour'] ?? 0,
		parts['minute'] ?? 0,
		parts['second'] ?? 0
	);
}

const DAY_S = 86_400;

/** '07:55', with the date under the first tick and where it changes; '3 Mar' where ticks are days. */
function timeLabels(ticks: readonly number[], stepS: number, timezone: string): string[] {
	const day = formatter('day', timezone, { day: 'numeric', month: 'short' });
	if (stepS >= DAY_S) return ticks.map((tick) => day.format(tick * 1000));
	const clock = formatter(stepS < 60 ? 'clockS' : 'clock', timezone, {
		hour: '2-digit',
		minute: '2-digit',
		...(stepS < 60 ? { second: '2-digit' } : {})
	});
	let last = '';
	return ticks.map((tick) => {
		const date = day.format(tick * 1000);
		const label = clock.format(tick * 1000);
		if (date === last) return label;
		last = date;
		return `${label}\n${date}`;
	});
}

const kept = new Map<string, Intl.DateTimeFormat>();
function formatter(name: string, timeZone: string, options: Intl.DateTimeFormatOptions) {
	const { locale } = words();
	const key = `${name} ${timeZone} ${locale}`;
	const format =
		kept.get(key) ?? new Intl.DateTimeFormat(locale, { timeZone, hourCycle: 'h23', ...options });
	kept.set(key, format);
	return format;
}
