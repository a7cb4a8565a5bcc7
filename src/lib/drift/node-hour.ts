import { fieldOf } from '$lib/magnetics/set-reset';
import type { Vec3 } from '$lib/magnetics/vector';
import { hourRecords, type StillRow, type TempSample } from './hour';
import { keptTempC, keptVector } from './packed';
import { stillRows } from './still';
import type { Stretch } from './stretches';
import type { HourRecord } from './types';

/** A reading as it came: counts over the scale, before polarity and offset. */
export interface RawRow {
	atMs: number;
	rawMg: Vec3;
	polarity: 1 | -1;
	tempC: number | null;
}

/** Fewer still readings of a level say too little of an hour. */
const LEAST_READINGS = 3;

/**
 * One node's hour from its readings in order of time: the still ones of the empty bay, or, where there are
 * too few of them, of the stay with the most. Null when nothing stood still. Rounded to what is stored, so
 * that an hour read back is the same.
 */
export function nodeHour(
	hourMs: number,
	rows: readonly RawRow[],
	stretches: readonly Stretch[],
	offsetMg: Vec3
): HourRecord | null {
	const still = stretches.flatMap(({ fromMs, toMs, stay }): StillRow[] => {
		const within = rows.filter(({ atMs }) => atMs >= fromMs && atMs < toMs);
		const fields = within.map(({ atMs, rawMg, polarity }) => ({
			atMs,
			fieldMg: fieldOf(rawMg, polarity, offsetMg)
		}));
		return stillRows(fields).map((row) => ({ ...row, offsetMg, stay }));
	});
	const temps = rows.flatMap(({ atMs, tempC }): TempSample[] =>
		tempC === null ? [] : [{ atMs, tempC }]
	);
	const records = hourRecords(still, temps).filter(({ n }) => n >= LEAST_READINGS);
	const vacant = records.find(({ stay }) => stay === null);
	const best = vacant ?? records.sort((a, b) => b.n - a.n)[0];
	return best === undefined ? null : kept({ ...best, hourMs });
}

const kept = (record: HourRecord): HourRecord => ({
	...record,
	fieldMg: keptVector(record.fieldMg),
	offsetMg: keptVector(record.offsetMg),
	tempC: record.tempC === null ? null : keptTempC(record.tempC)
});
