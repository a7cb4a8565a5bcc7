import type { ReadingRow } from '$lib/server/store/queries/readings';
import type { DayCount, HourPart } from '$lib/server/store/queries/rollups';

const HOUR_MS = 3_600_000;
const DAY_MS = 86_400_000;

/** Adds one row to the parts of its node's hour. */
export function addToHour(parts: Map<string, HourPart>, row: ReadingRow): void {
	const hourMs = Math.floor(row.atMs / HOUR_MS) * HOUR_MS;
	const key = `${row.nodeId}:${hourMs}`;
	const part = parts.get(key);
	if (part === undefined) {
		parts.set(key, firstOfHour(row, hourMs));
		return;
	}
	part.n += 1;
	[row.x, row.y, row.z].forEach((counts, axis) => {
		part.sum[axis] = (part.sum[axis] as number) + counts;
		part.min[axis] = Math.min(part.min[axis] as number, counts);
		part.max[axis] = Math.max(part.max[axis] as number, counts);
	});
	if (row.tempDc !== null) {
		part.tempSumDc += row.tempDc;
		part.tempN += 1;
	}
	if (row.batteryMv !== null)
		part.batteryMinMv = Math.min(part.batteryMinMv ?? row.batteryMv, row.batteryMv);
}

const firstOfHour = (row: ReadingRow, hourMs: number): HourPart => ({
	nodeId: row.nodeId,
	hourMs,
	n: 1,
	sum: [row.x, row.y, row.z],
	min: [row.x, row.y, row.z],
	max: [row.x, row.y, row.z],
	tempSumDc: row.tempDc ?? 0,
	tempN: row.tempDc === null ? 0 : 1,
	batteryMinMv: row.batteryMv
});

/** The counters of a node's day, made when missing. */
export function dayOf(counts: Map<string, DayCount>, nodeId: number, atMs: number): DayCount {
	const dayMs = Math.floor(atMs / DAY_MS) * DAY_MS;
	const key = `${nodeId}:${dayMs}`;
	let count = counts.get(key);
	if (count === undefined) {
		count = {
			nodeId,
			dayMs,
			messages: 0,
			duplicates: 0,
			rejected: 0,
			txFrames: 0,
			txRadioMs: 0,
			pulses: 0,
			batteryMinMv: null
		};
		counts.set(key, count);
	}
	return count;
}
