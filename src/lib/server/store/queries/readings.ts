import { insertTuples, numeral, select, type Sql } from './bulk';

const DAY_MS = 86_400_000;

/** One row of `reading`; counts are signed. */
export interface ReadingRow {
	nodeId: number;
	atMs: number;
	boot: number;
	seq: number;
	row: number;
	x: number;
	y: number;
	z: number;
	polarity: 1 | -1;
	tempDc: number | null;
	batteryMv: number | null;
	rssiDbm: number | null;
	flags: number;
}

const COLUMNS =
	'node_id AS nodeId, at_ms AS atMs, boot, seq, `row`, x, y, z, polarity, temp_dc AS tempDc, battery_mv AS batteryMv, rssi_dbm AS rssiDbm, flags';

/**
 * Stores rows, which must be sorted by key. A row that is there already (its bit was lost with an
 * accepted boot restart) is the same reading: it stays as it is.
 */
export async function insert(sql: Sql, rows: readonly ReadingRow[]): Promise<void> {
	await insertTuples(
		sql,
		'INSERT INTO reading (node_id,at_ms,boot,seq,`row`,x,y,z,polarity,temp_dc,battery_mv,rssi_dbm,flags)',
		rows.map(
			(r) =>
				`(${r.nodeId},${r.atMs},${r.boot},${r.seq},${r.row},${r.x},${r.y},${r.z},${r.polarity},${numeral(r.tempDc)},${numeral(r.batteryMv)},${numeral(r.rssiDbm)},${r.flags})`
		),
		'ON DUPLICATE KEY UPDATE node_id = VALUES(node_id)'
	);
}

/** Rows of one node with at_ms in [fromMs, toMs), by time; those that move no state left out. */
export async function moving(
	sql: Sql,
	nodeId: number,
	fromMs: number,
	toMs: number
): Promise<ReadingRow[]> {
	return await select(
		sql,
		`SELECT ${COLUMNS} FROM reading WHERE node_id = ? AND at_ms >= ? AND at_ms < ? AND flags & 16 = 0 ORDER BY at_ms`,
		[nodeId, fromMs, toMs]
	);
}

/** From when on every one of these sites keeps its readings. */
export async function keptFromMs(
	sql: Sql,
	siteIds: readonly number[],
	nowMs: number
): Promise<number> {
	const rows = await select<{ days: number | null }>(
		sql,
		'SELECT MIN(reading_days) AS days FROM site WHERE id IN (?)',
		[siteIds]
	);
	return nowMs - (rows[0]?.days ?? 0) * DAY_MS;
}

export interface RawCursor {
	atMs: number;
	boot: number;
	seq: number;
	row: number;
}

/** Rows of one node in [fromMs, toMs), oldest first, after a cursor. */
export async function raw(
	sql: Sql,
	nodeId: number,
	range: { fromMs: number; toMs: number },
	after: RawCursor | null,
	limit: number
): Promise<{ rows: ReadingRow[]; next: RawCursor | null }> {
	const start = after === null ? '' : 'AND (at_ms, boot, seq, `row`) > (?, ?, ?, ?)';
	const rows = await select<ReadingRow>(
		sql,
		`SELECT ${COLUMNS} FROM reading
		 WHERE node_id = ? AND at_ms >= ? AND at_ms < ? ${start}
		 ORDER BY at_ms, boot, seq, \`row\` LIMIT ?`,
		[
			nodeId,
			Math.max(range.fromMs, after?.atMs ?? range.fromMs),
			range.toMs,
			...(after === null ? [] : [after.atMs, after.boot, after.seq, after.row]),
			limit + 1
		]
	);
	const page = rows.slice(0, limit);
	const last = page.at(-1);
	const more = rows.length > limit && last !== undefined;
	return {
		rows: page,
		next: more ? { atMs: last.atMs, boot: last.boot, seq: last.seq, row: last.row } : null
	};
}

/** Means, least and greatest of one stretch of time; counts as stored, before polarity and offset. */
export interface Bucket {
	fromMs: number;
	toMs: number;
	n: number;
	mean: [number, number, number];
	min: [number, number, number];
	max: [number, number, number];
	/** 0.1 °C; null when no row had one. */
	tempDc: number | null;
	batteryMinMv: number | null;
}

interface BucketRow {
	bucket: number;
	n: number;
	xs: number;
	ys: number;
	zs: number;
	x0: number;
	y0: number;
	z0: number;
	x1: number;
	y1: number;
	z1: number;
	ts: number | null;
	tn: number;
	mv: number | null;
}

const HOUR_MS = 3_600_000;

/**
 * At most `points` buckets of equal length over [fromMs, toMs); empty ones are left out, so that a gap
 * shows as a gap. From buckets of an hour on they are whole hours and come from the hourly rollup.
 */
export async function buckets(
	sql: Sql,
	nodeId: number,
	fromMs: number,
	toMs: number,
	points: number
): Promise<Bucket[]> {
	const spanMs = Math.max(1, toMs - fromMs);
	const wishMs = Math.max(1, Math.ceil(spanMs / Math.max(1, points)));
	if (wishMs < HOUR_MS) return await fromRows(sql, nodeId, fromMs, toMs, wishMs);
	return await fromHours(sql, nodeId, fromMs, toMs, Math.ceil(wishMs / HOUR_MS) * HOUR_MS);
}

async function fromRows(sql: Sql, nodeId: number, fromMs: number, toMs: number, stepMs: number) {
	const rows = await select<BucketRow>(
		sql,
		`SELECT CAST(FLOOR((at_ms - ?) / ?) AS SIGNED) AS bucket, COUNT(*) AS n,
			CAST(AVG(x) AS DOUBLE) * COUNT(*) AS xs, CAST(AVG(y) AS DOUBLE) * COUNT(*) AS ys, CAST(AVG(z) AS DOUBLE) * COUNT(*) AS zs,
			MIN(x) AS x0, MIN(y) AS y0, MIN(z) AS z0, MAX(x) AS x1, MAX(y) AS y1, MAX(z) AS z1,
			CAST(SUM(temp_dc) AS DOUBLE) AS ts, COUNT(temp_dc) AS tn, MIN(battery_mv) AS mv
		 FROM reading WHERE node_id = ? AND at_ms >= ? AND at_ms < ? GROUP BY bucket ORDER BY bucket`,
		[fromMs, stepMs, nodeId, fromMs, toMs]
	);
	return rows.map((row) => toBucket(row, fromMs, stepMs));
}

async function fromHours(sql: Sql, nodeId: number, fromMs: number, toMs: number, stepMs: number) {
	const startMs = Math.floor(fromMs / HOUR_MS) * HOUR_MS;
	const rows = await select<BucketRow>(
		sql,
		`SELECT CAST(FLOOR((hour_ms - ?) / ?) AS SIGNED) AS bucket, CAST(SUM(n) AS DOUBLE) AS n,
			SUM(x_sum) AS xs, SUM(y_sum) AS ys, SUM(z_sum) AS zs,
			MIN(x_min) AS x0, MIN(y_min) AS y0, MIN(z_min) AS z0, MAX(x_max) AS x1, MAX(y_max) AS y1, MAX(z_max) AS z1,
			CAST(SUM(temp_sum_dc) AS DOUBLE) AS ts, CAST(SUM(temp_n) AS DOUBLE) AS tn, MIN(battery_min_mv) AS mv
		 FROM reading_hour WHERE node_id = ? AND hour_ms >= ? AND hour_ms < ? GROUP BY bucket ORDER BY bucket`,
		[startMs, stepMs, nodeId, startMs, toMs]
	);
	return rows.map((row) => toBucket(row, startMs, stepMs));
}

const toBucket = (row: BucketRow, startMs: number, stepMs: number): Bucket => ({
	fromMs: startMs + row.bucket * stepMs,
	toMs: startMs + (row.bucket + 1) * stepMs,
	n: row.n,
	mean: [row.xs / row.n, row.ys / row.n, row.zs / row.n],
	min: [row.x0, row.y0, row.z0],
	max: [row.x1, row.y1, row.z1],
	tempDc: row.ts === null || row.tn === 0 ? null : row.ts / row.tn,
	batteryMinMv: row.mv
});
