import { insertTuples, numeral, type Sql } from './bulk';

/** What one batch adds to one hour of one node. */
export interface HourPart {
	nodeId: number;
	hourMs: number;
	n: number;
	sum: [number, number, number];
	min: [number, number, number];
	max: [number, number, number];
	tempSumDc: number;
	tempN: number;
	batteryMinMv: number | null;
}

const least = (column: string) => `${column} = LEAST(${column}, VALUES(${column}))`;
const most = (column: string) => `${column} = GREATEST(${column}, VALUES(${column}))`;
const more = (column: string) => `${column} = ${column} + VALUES(${column})`;

/** Adds parts to the hourly rollup; sorted by key. */
export async function addHours(sql: Sql, parts: readonly HourPart[]): Promise<void> {
	await insertTuples(
		sql,
		'INSERT INTO reading_hour (node_id,hour_ms,n,x_sum,y_sum,z_sum,x_min,y_min,z_min,x_max,y_max,z_max,temp_sum_dc,temp_n,battery_min_mv)',
		parts.map(
			(p) =>
				`(${p.nodeId},${p.hourMs},${p.n},${p.sum.join(',')},${p.min.join(',')},${p.max.join(',')},${p.tempSumDc},${p.tempN},${numeral(p.batteryMinMv)})`
		),
		`ON DUPLICATE KEY UPDATE ${[
			...['n', 'x_sum', 'y_sum', 'z_sum', 'temp_sum_dc', 'temp_n'].map(more),
			...['x_min', 'y_min', 'z_min'].map(least),
			...['x_max', 'y_max', 'z_max'].map(most),
			leastOrNull('battery_min_mv')
		].join(', ')}`
	);
}

/** LEAST is NULL when either side is. */
const leastOrNull = (column: string) =>
	`${column} = LEAST(COALESCE(${column}, VALUES(${column})), COALESCE(VALUES(${column}), ${column}))`;

/** What one batch adds to one day's counters of one node. */
export interface DayCount {
	nodeId: number;
	dayMs: number;
	messages: number;
	duplicates: number;
	rejected: number;
	/** Counted since boot by the node: only the increase is added. */
	txFrames: number;
	txRadioMs: number;
	pulses: number;
	batteryMinMv: number | null;
}

/** Adds to the day's counters; sorted by key. */
export async function addCounts(sql: Sql, counts: readonly DayCount[]): Promise<void> {
	await insertTuples(
		sql,
		'INSERT INTO node_count (node_id,day_ms,messages,duplicates,rejected,tx_frames,tx_radio_ms,pulses,battery_min_mv)',
		counts.map(
			(c) =>
				`(${c.nodeId},${c.dayMs},${c.messages},${c.duplicates},${c.rejected},${c.txFrames},${c.txRadioMs},${c.pulses},${numeral(c.batteryMinMv)})`
		),
		`ON DUPLICATE KEY UPDATE ${[
			...['messages', 'duplicates', 'rejected', 'tx_frames', 'tx_radio_ms', 'pulses'].map(more),
			leastOrNull('battery_min_mv')
		].join(', ')}`
	);
}
