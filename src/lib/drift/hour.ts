import { median } from '$lib/numeric/quantile';
import type { Vec3 } from '$lib/magnetics/vector';
import type { HourRecord } from './types';

/** A still reading, vacant or within one stay. */
export interface StillRow {
	atMs: number;
	fieldMg: Vec3;
	offsetMg: Vec3;
	stay: string | null;
}

export interface TempSample {
	atMs: number;
	tempC: number;
}

/** Temperatures are averaged over 10 min; a row over 5 min from any does not count (method 5). */
const HALF_WINDOW_MS = 300_000;
const HOUR_MS = 3_600_000;

/** Mean of the samples within 5 min of each row's time, in order of time; null where there is none. */
export function smoothedTemps(
	rows: readonly StillRow[],
	samples: readonly TempSample[]
): (number | null)[] {
	let from = 0;
	let to = 0;
	let sum = 0;
	return rows.map(({ atMs }) => {
		for (; (samples[to]?.atMs ?? Infinity) <= atMs + HALF_WINDOW_MS; to++)
			sum += (samples[to] as TempSample).tempC;
		for (; from < to && (samples[from] as TempSample).atMs < atMs - HALF_WINDOW_MS; from++)
			sum -= (samples[from] as TempSample).tempC;
		return to > from ? sum / (to - from) : null;
	});
}

function summary(
	hourMs: number,
	stay: string | null,
	rows: readonly StillRow[],
	temps: readonly number[]
): HourRecord {
	const axis = (pick: (row: StillRow) => Vec3, i: 0 | 1 | 2) =>
		median(rows.map((row) => pick(row)[i]));
	const vector = (pick: (row: StillRow) => Vec3): Vec3 => [
		axis(pick, 0),
		axis(pick, 1),
		axis(pick, 2)
	];
	return {
		hourMs,
		fieldMg: vector((row) => row.fieldMg),
		offsetMg: vector((row) => row.offsetMg),
		tempC: median(temps),
		n: rows.length,
		stay
	};
}

/**
 * Hour records of still rows in order of time: one an hour and level (vacant, or one stay). Rows without a
 * temperature are left out where any has one, and counted without where none has.
 */
export function hourRecords(
	rows: readonly StillRow[],
	samples: readonly TempSample[]
): HourRecord[] {
	const temps = smoothedTemps(rows, samples);
	const groups = new Map<string, { rows: StillRow[]; temps: (number | null)[] }>();
	for (const [i, row] of rows.entries()) {
		const hourMs = Math.floor(row.atMs / HOUR_MS) * HOUR_MS;
		const key = `${hourMs} ${row.stay ?? ''}`;
		const group = groups.get(key) ?? { rows: [], temps: [] };
		group.rows.push(row);
		group.temps.push(temps[i] ?? null);
		groups.set(key, group);
	}
	return [...groups.values()].map(recordOf);
}

function recordOf(group: { rows: StillRow[]; temps: (number | null)[] }): HourRecord {
	const first = group.rows[0] as StillRow;
	const hourMs = Math.floor(first.atMs / HOUR_MS) * HOUR_MS;
	const near = group.rows.filter((_, i) => group.temps[i] !== null);
	const temps = group.temps.filter((temp) => temp !== null);
	if (near.length > 0) return summary(hourMs, first.stay, near, temps);
	return { ...summary(hourMs, first.stay, group.rows, [0]), tempC: null };
}
