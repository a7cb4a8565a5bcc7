import { run, select, type Sql } from './bulk';
import { read, type RefreshRow } from './refreshes';

/** What the worker must know of an open film refresh beside its row. */
export interface OpenRefresh extends RefreshRow {
	serial: string;
	withdrawnAtMs: number | null;
	nodeBayId: number | null;
	periodS: number;
	usualPeriodS: number;
	deltaMg: number;
	profileCode: string;
	profileBody: string;
	heardBoot: number | null;
	batteryMv: number | null;
	bayState: 'vacant' | 'occupied' | 'unknown';
	baySinceMs: number | null;
	bayCondition: string;
	timezone: string;
	quietFromMin: number;
	quietToMin: number;
	bulkState: string | null;
	lastPulseAtMs: number | null;
	lastEndAtMs: number | null;
	answeredAtMs: number | null;
	outcome: 0 | 1 | 2 | null;
	answer: string | null;
	commandExpiresAtMs: number | null;
	/** Event time of the pair that answers the command. */
	pairAtMs: number | null;
}

const MORE = `, n.serial, n.withdrawn_at_ms AS withdrawnAtMs, n.bay_id AS nodeBayId, n.period_s AS periodS,
	n.usual_period_s AS usualPeriodS, n.delta_mg AS deltaMg, n.profile_code AS profileCode, p.body AS profileBody,
	f.heard_boot AS heardBoot, f.battery_mv AS batteryMv, COALESCE(b.state, 'unknown') AS bayState, b.since_ms AS baySinceMs,
	COALESCE(b.condition, 'unplaced') AS bayCondition, s.timezone, s.quiet_from_min AS quietFromMin,
	s.quiet_to_min AS quietToMin, k.state AS bulkState,
	(SELECT MAX(q.at_ms) FROM pulse q WHERE q.node_id = r.node_id AND q.moving = 1) AS lastPulseAtMs,
	(SELECT MAX(e.ended_at_ms) FROM refresh e WHERE e.node_id = r.node_id AND e.state IN ('proved', 'not_cured')
		AND e.origin <> 'pair_rule') AS lastEndAtMs,
	c.answered_at_ms AS answeredAtMs, c.outcome, c.reason AS answer, c.expires_at_ms AS commandExpiresAtMs,
	(SELECT MAX(q.at_ms) FROM pulse q WHERE q.node_id = r.node_id AND q.command_id = r.command_id AND q.source = 'pair'
	 ) AS pairAtMs`;
const REST = `JOIN node n ON n.id = r.node_id JOIN profile p ON p.code = n.profile_code JOIN site s ON s.id = r.site_id
	LEFT JOIN node_fast f ON f.node_id = r.node_id LEFT JOIN bay_state b ON b.bay_id = r.bay_id
	LEFT JOIN refresh_bulk k ON k.id = r.bulk_id LEFT JOIN command c ON c.id = r.command_id`;

/** Everything that is not ended, oldest first. */
export async function open(sql: Sql): Promise<OpenRefresh[]> {
	return await read<OpenRefresh>(
		sql,
		MORE,
		`${REST} WHERE r.ended_at_ms IS NULL ORDER BY r.asked_at_ms, r.id LIMIT 5000`,
		[]
	);
}

/** Ended, with a command that the node may have had already: does it say that it obeyed? */
export async function lateObeyed(sql: Sql, sinceMs: number): Promise<OpenRefresh[]> {
	return await read<OpenRefresh>(
		sql,
		MORE,
		`${REST} WHERE r.ended_at_ms > ? AND r.state IN ('called_off', 'expired') AND r.obeyed_at_ms IS NULL
			AND (c.outcome = 0 OR EXISTS (SELECT 1 FROM pulse q WHERE q.node_id = r.node_id AND q.command_id = r.command_id))`,
		[sinceMs]
	);
}

export interface PairRow {
	boot: number;
	seq: number;
	atMs: number;
	set: [number, number, number];
	reset: [number, number, number];
	before: { polarity: 1 | -1 | 0; counts: [number, number, number] } | null;
	after: [number, number, number] | null;
	tempDc: number | null;
	accepted: boolean | null;
	refusal: string | null;
}

interface RawPair {
	boot: number;
	seq: number;
	atMs: number;
	sx: number;
	sy: number;
	sz: number;
	rx: number;
	ry: number;
	rz: number;
	bp: 1 | -1 | 0 | null;
	bx: number | null;
	by: number | null;
	bz: number | null;
	ax: number | null;
	ay: number | null;
	az: number | null;
	tempDc: number | null;
	accepted: number | null;
	refusal: string | null;
}

const PAIR = `boot, seq, at_ms AS atMs, set_x AS sx, set_y AS sy, set_z AS sz, reset_x AS rx, reset_y AS ry, reset_z AS rz,
	before_p AS bp, before_x AS bx, before_y AS \`by\`, before_z AS bz, after_x AS ax, after_y AS ay, after_z AS az,
	temp_dc AS tempDc, accepted, refusal`;

const toPair = (p: RawPair): PairRow => ({
	boot: p.boot,
	seq: p.seq,
	atMs: p.atMs,
	set: [p.sx, p.sy, p.sz],
	reset: [p.rx, p.ry, p.rz],
	before:
		p.bp === null || p.bx === null || p.by === null || p.bz === null
			? null
			: { polarity: p.bp, counts: [p.bx, p.by, p.bz] },
	after: p.ax === null || p.ay === null || p.az === null ? null : [p.ax, p.ay, p.az],
	tempDc: p.tempDc,
	accepted: p.accepted === null ? null : p.accepted === 1,
	refusal: p.refusal
});

/** The pair that answered a command. */
export async function pairOf(sql: Sql, nodeId: number, commandId: string): Promise<PairRow | null> {
	const rows = await select<RawPair>(
		sql,
		`SELECT ${PAIR} FROM pulse WHERE node_id = ? AND command_id = ? AND source = 'pair' ORDER BY at_ms DESC LIMIT 1`,
		[nodeId, Buffer.from(commandId, 'hex')]
	);
	return rows[0] === undefined ? null : toPair(rows[0]);
}

/** The last accepted pair before an instant: its offset was in use until then. */
export async function pairBefore(sql: Sql, nodeId: number, atMs: number): Promise<PairRow | null> {
	const rows = await select<RawPair>(
		sql,
		`SELECT ${PAIR} FROM pulse WHERE node_id = ? AND at_ms < ? AND source = 'pair' AND accepted = 1 ORDER BY at_ms DESC LIMIT 1`,
		[nodeId, atMs]
	);
	return rows[0] === undefined ? null : toPair(rows[0]);
}

export interface CountRow {
	atMs: number;
	x: number;
	y: number;
	z: number;
	polarity: 1 | -1;
	tempDc: number | null;
}

/** At most `limit` rows in [fromMs, toMs): the first, or the last before `toMs`; oldest first. */
export async function rowsIn(
	sql: Sql,
	nodeId: number,
	span: { fromMs: number; toMs: number; limit: number; take: 'first' | 'last' }
): Promise<CountRow[]> {
	const rows = await select<CountRow>(
		sql,
		`SELECT at_ms AS atMs, x, y, z, polarity, temp_dc AS tempDc FROM reading
		 WHERE node_id = ? AND at_ms >= ? AND at_ms < ? AND flags & 17 = 0
		 ORDER BY at_ms ${span.take === 'first' ? 'ASC' : 'DESC'} LIMIT ?`,
		[nodeId, span.fromMs, span.toMs, span.limit]
	);
	return span.take === 'first' ? rows : rows.reverse();
}

export interface ReferenceRow {
	x: number;
	y: number;
	z: number;
	ox: number | null;
	oy: number | null;
	oz: number | null;
	tempC: number | null;
	sigmaMg: number;
}

export async function acceptedReference(sql: Sql, nodeId: number): Promise<ReferenceRow | null> {
	const rows = await select<ReferenceRow>(
		sql,
		`SELECT x_mg AS x, y_mg AS y, z_mg AS z, offset_x_mg AS ox, offset_y_mg AS oy, offset_z_mg AS oz, temp_c AS tempC,
			sigma_mg AS sigmaMg FROM reference
		 WHERE node_id = ? AND accepted_at_ms IS NOT NULL AND superseded_at_ms IS NULL ORDER BY learned_at_ms DESC LIMIT 1`,
		[nodeId]
	);
	return rows[0] ?? null;
}

/** Length of the unexplained vector in drift's closed hours: the last one over by `fromMs`, and one begun after `toMs`. */
export async function unexplained(
	sql: Sql,
	nodeId: number,
	pulseAtMs: number
): Promise<{ beforeMg: number | null; afterMg: number | null }> {
	const HOUR_MS = 3_600_000;
	const length =
		'SQRT(POW(unexplained_x_ug, 2) + POW(unexplained_y_ug, 2) + POW(unexplained_z_ug, 2)) / 1000';
	const one = async (where: string, values: readonly unknown[]) =>
		(
			await select<{ mg: number }>(
				sql,
				`SELECT ${length} AS mg FROM drift_hour WHERE node_id = ? AND unexplained_x_ug IS NOT NULL AND ${where} LIMIT 1`,
				[nodeId, ...values]
			)
		)[0]?.mg ?? null;
	return {
		beforeMg: await one('hour_ms <= ? AND hour_ms > ? ORDER BY hour_ms DESC', [
			pulseAtMs - HOUR_MS,
			pulseAtMs - 48 * HOUR_MS
		]),
		afterMg: await one('hour_ms >= ? ORDER BY hour_ms DESC', [pulseAtMs])
	};
}

/** A setting of drift as overridden for a node or its site; null = the default. */
export async function driftingLimit(
	sql: Sql,
	siteId: number,
	nodeId: number,
	nowMs: number
): Promise<number | null> {
	const rows = await select<{ value: string }>(
		sql,
		`SELECT value FROM parameter WHERE site_id = ? AND (node_id IS NULL OR node_id = ?) AND name = 'driftingMg'
			AND from_ms <= ? AND (until_ms IS NULL OR until_ms > ?) ORDER BY node_id IS NULL, id DESC LIMIT 1`,
		[siteId, nodeId, nowMs, nowMs]
	);
	const value = Number(rows[0]?.value ?? NaN);
	return Number.isFinite(value) ? value : null;
}

/** The same command once more for the boot of now; an answer that came in between stays. */
export async function reopenCommand(
	sql: Sql,
	commandId: string,
	again: { boot: number; expiresAtMs: number; unless: string }
): Promise<void> {
	await run(
		sql,
		`UPDATE command SET boot = ?, expires_at_ms = ?, answered_at_ms = NULL, outcome = NULL, reason = NULL
		 WHERE id = ? AND (answered_at_ms IS NULL OR reason = ?)`,
		[again.boot, again.expiresAtMs, Buffer.from(commandId, 'hex'), again.unless]
	);
}

/** Ends one unanswered command. */
export async function endCommand(
	sql: Sql,
	commandId: string,
	nowMs: number,
	reason: string
): Promise<void> {
	await run(
		sql,
		'UPDATE command SET expires_at_ms = LEAST(expires_at_ms, ?), reason = ? WHERE id = ? AND answered_at_ms IS NULL',
		[nowMs, reason, Buffer.from(commandId, 'hex')]
	);
}

/** What a `report` command to a node needs. */
export async function habitOf(
	sql: Sql,
	nodeId: number
): Promise<{ usualPeriodS: number; deltaMg: number; heardBoot: number | null } | null> {
	const rows = await select<{ usualPeriodS: number; deltaMg: number; heardBoot: number | null }>(
		sql,
		`SELECT n.usual_period_s AS usualPeriodS, n.delta_mg AS deltaMg, f.heard_boot AS heardBoot
		 FROM node n LEFT JOIN node_fast f ON f.node_id = n.id WHERE n.id = ?`,
		[nodeId]
	);
	return rows[0] ?? null;
}
