import { run, select, type Sql } from './bulk';

type Counts = readonly [number, number, number];

/** One row of `pulse`; counts are signed, null = did not come. */
export interface PulseRow {
	nodeId: number;
	boot: number;
	seq: number;
	atMs: number;
	source: 'pair' | 'ack' | 'hello';
	set: Counts | null;
	reset: Counts | null;
	before: { polarity: 1 | -1 | 0; counts: Counts } | null;
	after: Counts | null;
	/** Polarity the film holds afterwards. */
	polarityAfter: 1 | -1;
	tempDc: number | null;
	batteryMv: number | null;
	commandId: Uint8Array | null;
}

const axes = (counts: Counts | null) => counts ?? [null, null, null];

export async function insert(
	sql: Sql,
	rows: readonly (PulseRow & { moving: boolean })[]
): Promise<void> {
	if (rows.length === 0) return;
	await run(
		sql,
		`INSERT INTO pulse (node_id, boot, seq, at_ms, source, set_x, set_y, set_z, reset_x, reset_y, reset_z,
			before_p, before_x, before_y, before_z, after_x, after_y, after_z, polarity_after, temp_dc, battery_mv, command_id, moving)
		 VALUES ? ON DUPLICATE KEY UPDATE node_id = VALUES(node_id)`,
		[
			rows.map((r) => [
				r.nodeId,
				r.boot,
				r.seq,
				r.atMs,
				r.source,
				...axes(r.set),
				...axes(r.reset),
				r.before?.polarity ?? null,
				...axes(r.before?.counts ?? null),
				...axes(r.after),
				r.polarityAfter,
				r.tempDc,
				r.batteryMv,
				r.commandId === null ? null : Buffer.from(r.commandId),
				r.moving
			])
		]
	);
}

interface RawPulse {
	nodeId: number;
	boot: number;
	seq: number;
	atMs: number;
	source: PulseRow['source'];
	sx: number | null;
	sy: number | null;
	sz: number | null;
	rx: number | null;
	ry: number | null;
	rz: number | null;
	bp: 1 | -1 | 0 | null;
	bx: number | null;
	by: number | null;
	bz: number | null;
	ax: number | null;
	ay: number | null;
	az: number | null;
	polarityAfter: 1 | -1;
	tempDc: number | null;
	batteryMv: number | null;
	commandId: Buffer | null;
}

const counts = (x: number | null, y: number | null, z: number | null): Counts | null =>
	x === null || y === null || z === null ? null : [x, y, z];

function toPulse(r: RawPulse): PulseRow {
	const before = counts(r.bx, r.by, r.bz);
	return {
		nodeId: r.nodeId,
		boot: r.boot,
		seq: r.seq,
		atMs: r.atMs,
		source: r.source,
		set: counts(r.sx, r.sy, r.sz),
		reset: counts(r.rx, r.ry, r.rz),
		before: before === null || r.bp === null ? null : { polarity: r.bp, counts: before },
		after: counts(r.ax, r.ay, r.az),
		polarityAfter: r.polarityAfter,
		tempDc: r.tempDc,
		batteryMv: r.batteryMv,
		commandId: r.commandId
	};
}

/** Pulses of one node with at_ms in [fromMs, toMs) that move states. */
export async function moving(
	sql: Sql,
	nodeId: number,
	fromMs: number,
	toMs: number
): Promise<PulseRow[]> {
	const rows = await select<RawPulse>(
		sql,
		`SELECT node_id AS nodeId, boot, seq, at_ms AS atMs, source, set_x AS sx, set_y AS sy, set_z AS sz,
			reset_x AS rx, reset_y AS ry, reset_z AS rz, before_p AS bp, before_x AS bx, before_y AS \`by\`, before_z AS bz,
			after_x AS ax, after_y AS ay, after_z AS az, polarity_after AS polarityAfter, temp_dc AS tempDc,
			battery_mv AS batteryMv, command_id AS commandId
		 FROM pulse WHERE node_id = ? AND at_ms >= ? AND at_ms < ? AND moving = 1`,
		[nodeId, fromMs, toMs]
	);
	return rows.map(toPulse);
}

/** What detection judged of a pulse. */
export async function judge(
	sql: Sql,
	verdict: { nodeId: number; boot: number; seq: number; accepted: boolean; why: string | null }
): Promise<void> {
	await run(
		sql,
		'UPDATE pulse SET accepted = ?, refusal = ? WHERE node_id = ? AND boot = ? AND seq = ?',
		[
			verdict.accepted,
			verdict.why?.slice(0, 120) ?? null,
			verdict.nodeId,
			verdict.boot,
			verdict.seq
		]
	);
}
