import { hexLiteral, insertTuples, numeral, run, select, type Sql } from './bulk';

/** What the columns hold of detection's states. */
export const FAST_BYTES = 300;
export const SLOW_BYTES = 4096;

/** How far detection has taken a node's rows. */
export interface Pointer {
	atMs: number;
	boot: number;
	seq: number;
	row: number;
}

/** One row of `node_fast`. */
export interface FastRow {
	nodeId: number;
	heardAtMs: number;
	heardBoot: number | null;
	pointer: Pointer | null;
	waitingFromMs: number | null;
	last: { atMs: number; x: number; y: number; z: number; polarity: number } | null;
	tempDc: number | null;
	batteryMv: number | null;
	rssiDbm: number | null;
	marks: number;
	/** Detection's fast state; empty = none yet. */
	state: Uint8Array;
}

/** Bits of `node_fast.marks`. */
export const MARK = { clockOff: 1, unsigned: 2, fastReporting: 4 } as const;

const set = (column: string) => `${column} = VALUES(${column})`;
const FAST = [
	'heard_at_ms',
	'heard_boot',
	'row_at_ms',
	'boot',
	'seq',
	'`row`',
	'waiting_from_ms',
	'last_at_ms',
	'x',
	'y',
	'z',
	'polarity',
	'temp_dc',
	'battery_mv',
	'rssi_dbm',
	'marks',
	'state'
];
/** An empty state leaves the stored one: detection of that node is not in memory. */
const KEEP_STATE = 'state = IF(LENGTH(VALUES(state)) = 0, state, VALUES(state))';
const ON_FAST = `ON DUPLICATE KEY UPDATE ${[...FAST.slice(0, -1).map(set), KEEP_STATE].join(', ')}`;

const numerals = (values: readonly (number | null)[]) => values.map(numeral).join(',');

function fastTuple(r: FastRow): string {
	const p = r.pointer;
	const l = r.last;
	return `(${numerals([
		r.nodeId,
		r.heardAtMs,
		r.heardBoot,
		p?.atMs ?? null,
		p?.boot ?? null,
		p?.seq ?? null,
		p?.row ?? null,
		r.waitingFromMs,
		l?.atMs ?? null,
		l?.x ?? null,
		l?.y ?? null,
		l?.z ?? null,
		l?.polarity ?? null,
		r.tempDc,
		r.batteryMv,
		r.rssiDbm,
		r.marks
	])},${hexLiteral(r.state)})`;
}

/** Writes rows sorted by node. */
export async function writeFast(sql: Sql, rows: readonly FastRow[]): Promise<void> {
	await insertTuples(
		sql,
		`INSERT INTO node_fast (node_id,${FAST.join(',')})`,
		rows.map(fastTuple),
		ON_FAST
	);
}

export async function writeSlow(
	sql: Sql,
	rows: readonly { nodeId: number; state: Uint8Array }[]
): Promise<void> {
	await insertTuples(
		sql,
		'INSERT INTO node_slow (node_id, state)',
		rows.map((r) => `(${r.nodeId},${hexLiteral(r.state)})`),
		'ON DUPLICATE KEY UPDATE state = VALUES(state)'
	);
}

export interface States {
	nodeId: number;
	fast: Buffer;
	slow: Buffer | null;
}

/** Detection's stored state of nodes; those without any are left out. */
export async function states(sql: Sql, nodeIds: readonly number[]): Promise<States[]> {
	if (nodeIds.length === 0) return [];
	return await select(
		sql,
		`SELECT f.node_id AS nodeId, f.state AS fast, s.state AS slow
		 FROM node_fast f LEFT JOIN node_slow s ON s.node_id = f.node_id
		 WHERE f.node_id IN (?) AND LENGTH(f.state) > 0`,
		[nodeIds]
	);
}

/** A node that begins anew (placed): nothing of its former state remains. */
export async function clear(sql: Sql, nodeId: number, waitingFromMs: number): Promise<void> {
	await run(
		sql,
		`INSERT INTO node_fast (node_id, heard_at_ms, waiting_from_ms, state) VALUES (?, 0, ?, '')
		 ON DUPLICATE KEY UPDATE row_at_ms = NULL, boot = NULL, seq = NULL, \`row\` = NULL,
			waiting_from_ms = VALUES(waiting_from_ms), state = ''`,
		[nodeId, waitingFromMs]
	);
	await run(sql, 'DELETE FROM node_slow WHERE node_id = ?', [nodeId]);
	await run(sql, 'DELETE FROM node_snapshot WHERE node_id = ?', [nodeId]);
}

/** A node's state as of an event time, the same `atMs` for all members of a group. */
export interface SnapshotRow {
	nodeId: number;
	atMs: number;
	takenAtMs: number;
	daily: boolean;
	pointer: Pointer | null;
	fast: Uint8Array;
	slow: Uint8Array | null;
}

export async function writeSnapshots(sql: Sql, rows: readonly SnapshotRow[]): Promise<void> {
	await insertTuples(
		sql,
		'INSERT INTO node_snapshot (node_id,at_ms,taken_at_ms,daily,row_at_ms,boot,seq,`row`,fast,slow)',
		rows.map((r) => {
			const p = r.pointer;
			const order = [p?.atMs ?? null, p?.boot ?? null, p?.seq ?? null, p?.row ?? null];
			return `(${numerals([r.nodeId, r.atMs, r.takenAtMs, r.daily ? 1 : 0, ...order])},${hexLiteral(r.fast)},${hexLiteral(r.slow)})`;
		}),
		`ON DUPLICATE KEY UPDATE ${['taken_at_ms', 'daily', 'row_at_ms', 'boot', 'seq', '`row`', 'fast', 'slow'].map(set).join(', ')}`
	);
}

/** Times at which every one of the nodes has a snapshot, newest first. */
export async function snapshotTimes(
	sql: Sql,
	nodeIds: readonly number[]
): Promise<{ atMs: number; takenAtMs: number }[]> {
	if (nodeIds.length === 0) return [];
	return await select(
		sql,
		`SELECT at_ms AS atMs, MIN(taken_at_ms) AS takenAtMs FROM node_snapshot
		 WHERE node_id IN (?) GROUP BY at_ms HAVING COUNT(*) = ? ORDER BY at_ms DESC`,
		[nodeIds, nodeIds.length]
	);
}

/** The time of the newest snapshot of each node that has one. */
export async function newestSnapshots(
	sql: Sql,
	nodeIds: readonly number[]
): Promise<Map<number, number>> {
	if (nodeIds.length === 0) return new Map();
	const rows = await select<{ nodeId: number; atMs: number }>(
		sql,
		'SELECT node_id AS nodeId, MAX(at_ms) AS atMs FROM node_snapshot WHERE node_id IN (?) GROUP BY node_id',
		[nodeIds]
	);
	return new Map(rows.map(({ nodeId, atMs }) => [nodeId, atMs]));
}

interface RawSnapshot {
	nodeId: number;
	atMs: number;
	takenAtMs: number;
	daily: number;
	rowAtMs: number | null;
	boot: number | null;
	seq: number | null;
	row: number | null;
	fast: Buffer;
	slow: Buffer | null;
}

export async function snapshot(
	sql: Sql,
	nodeIds: readonly number[],
	atMs: number
): Promise<SnapshotRow[]> {
	const rows = await select<RawSnapshot>(
		sql,
		`SELECT node_id AS nodeId, at_ms AS atMs, taken_at_ms AS takenAtMs, daily, row_at_ms AS rowAtMs, boot, seq, \`row\`, fast, slow
		 FROM node_snapshot WHERE node_id IN (?) AND at_ms = ? ORDER BY node_id`,
		[nodeIds, atMs]
	);
	return rows.map(({ rowAtMs, boot, seq, row, daily, ...rest }) => ({
		...rest,
		daily: daily === 1,
		pointer: toPointer(rowAtMs, boot, seq, row)
	}));
}

export const toPointer = (
	atMs: number | null,
	boot: number | null,
	seq: number | null,
	row: number | null
): Pointer | null =>
	atMs === null || boot === null || seq === null || row === null ? null : { atMs, boot, seq, row };

/** After a replay: what was taken after its beginning no longer holds. */
export async function dropSnapshotsTakenAfter(
	sql: Sql,
	nodeIds: readonly number[],
	takenAtMs: number
): Promise<void> {
	if (nodeIds.length === 0) return;
	await run(sql, 'DELETE FROM node_snapshot WHERE node_id IN (?) AND taken_at_ms > ?', [
		nodeIds,
		takenAtMs
	]);
}

/** How long the snapshots of some nodes are kept, event time. */
export interface Keep {
	nodeIds: readonly number[];
	denseFromMs: number;
	dailyFromMs: number;
}

/** Keeps the dense ones and the daily ones of each group since its own times. */
export async function thinSnapshots(sql: Sql, keeps: readonly Keep[]): Promise<void> {
	if (keeps.length === 0) return;
	const terms = keeps.map(
		({ nodeIds, denseFromMs, dailyFromMs }) =>
			`(node_id IN (${nodeIds.join(',')}) AND at_ms < ${denseFromMs} AND (daily = 0 OR at_ms < ${dailyFromMs}))`
	);
	await run(sql, `DELETE FROM node_snapshot WHERE ${terms.join(' OR ')}`);
}

export async function clocks(
	sql: Sql,
	nodeIds: readonly number[] | null
): Promise<{ nodeId: number; skews: Buffer }[]> {
	if (nodeIds !== null && nodeIds.length === 0) return [];
	return await select(
		sql,
		`SELECT node_id AS nodeId, skews FROM node_clock ${nodeIds === null ? '' : 'WHERE node_id IN (?)'}`,
		nodeIds === null ? [] : [nodeIds]
	);
}

export async function writeClocks(
	sql: Sql,
	rows: readonly { nodeId: number; skews: Uint8Array }[]
): Promise<void> {
	await insertTuples(
		sql,
		'INSERT INTO node_clock (node_id, skews)',
		rows.map((r) => `(${r.nodeId},${hexLiteral(r.skews)})`),
		'ON DUPLICATE KEY UPDATE skews = VALUES(skews)'
	);
}

/** Hours that rows too late for a snapshot touched. */
export async function markHours(
	sql: Sql,
	marks: readonly { nodeId: number; hourMs: number }[],
	nowMs: number
): Promise<void> {
	await insertTuples(
		sql,
		'INSERT INTO replay_hour (node_id, hour_ms, marked_at_ms)',
		marks.map((m) => `(${m.nodeId},${m.hourMs},${nowMs})`),
		'ON DUPLICATE KEY UPDATE marked_at_ms = VALUES(marked_at_ms)'
	);
}

export async function markedHours(
	sql: Sql
): Promise<{ nodeId: number; hourMs: number; markedAtMs: number }[]> {
	return await select(
		sql,
		'SELECT node_id AS nodeId, hour_ms AS hourMs, marked_at_ms AS markedAtMs FROM replay_hour ORDER BY marked_at_ms LIMIT 10000'
	);
}

/** Marks that a replay has dealt with: those made before it began. */
export async function clearMarks(
	sql: Sql,
	nodeIds: readonly number[],
	markedBeforeMs: number
): Promise<void> {
	if (nodeIds.length === 0) return;
	await run(sql, 'DELETE FROM replay_hour WHERE node_id IN (?) AND marked_at_ms <= ?', [
		nodeIds,
		markedBeforeMs
	]);
}
