import type { Vec3 } from '$lib/magnetics/vector';
import { select, type Sql } from './bulk';

/** What one hour of some nodes is made of. Counts are signed, as stored. */
export interface HourRow {
	nodeId: number;
	atMs: number;
	x: number;
	y: number;
	z: number;
	polarity: 1 | -1;
	/** 0.1 °C. */
	tempDc: number | null;
	flags: number;
}

/** Rows of nodes with at_ms in [fromMs, toMs) that move states, by node and time. */
export async function readings(
	sql: Sql,
	nodeIds: readonly number[],
	fromMs: number,
	toMs: number
): Promise<HourRow[]> {
	if (nodeIds.length === 0) return [];
	return await select(
		sql,
		`SELECT node_id AS nodeId, at_ms AS atMs, x, y, z, polarity, temp_dc AS tempDc, flags FROM reading
		 WHERE node_id IN (?) AND at_ms >= ? AND at_ms < ? AND flags & 16 = 0 ORDER BY node_id, at_ms, boot, seq, \`row\``,
		[nodeIds, fromMs, toMs]
	);
}

export interface StateRow {
	bayId: number;
	atMs: number;
	state: 'vacant' | 'occupied' | 'unknown';
}

/** Effective history of bays within [fromMs, toMs), and the newest entry at or before it. */
export async function states(
	sql: Sql,
	bayIds: readonly number[],
	fromMs: number,
	toMs: number
): Promise<StateRow[]> {
	if (bayIds.length === 0) return [];
	return await select(
		sql,
		`SELECT h.bay_id AS bayId, h.at_ms AS atMs, h.state FROM history h
		 WHERE h.bay_id IN (?) AND h.voided_at_ms IS NULL AND h.at_ms < ? AND h.at_ms >= COALESCE(
			(SELECT MAX(p.at_ms) FROM history p WHERE p.bay_id = h.bay_id AND p.at_ms <= ? AND p.voided_at_ms IS NULL), ?)
		 ORDER BY h.bay_id, h.at_ms, h.id`,
		[bayIds, toMs, fromMs, fromMs]
	);
}

export interface ClosedSpan {
	bayId: number;
	fromMs: number;
	toMs: number;
}

export async function closures(
	sql: Sql,
	bayIds: readonly number[],
	fromMs: number,
	toMs: number
): Promise<ClosedSpan[]> {
	if (bayIds.length === 0) return [];
	return await select(
		sql,
		`SELECT bay_id AS bayId, from_ms AS fromMs, LEAST(to_ms, COALESCE(lifted_at_ms, to_ms)) AS toMs FROM closure
		 WHERE bay_id IN (?) AND from_ms < ? AND LEAST(to_ms, COALESCE(lifted_at_ms, to_ms)) > ?`,
		[bayIds, toMs, fromMs]
	);
}

type Counts = Vec3;

/** A pulse with what drift needs of it. */
export interface DriftPulse {
	nodeId: number;
	boot: number;
	seq: number;
	atMs: number;
	source: 'pair' | 'ack' | 'hello';
	set: Counts | null;
	reset: Counts | null;
	before: { polarity: 1 | -1; counts: Counts } | null;
	tempC: number | null;
	accepted: boolean;
}

type Axis = number | null;
interface RawPulse extends Pick<DriftPulse, 'nodeId' | 'boot' | 'seq' | 'atMs' | 'source'> {
	sx: Axis;
	sy: Axis;
	sz: Axis;
	rx: Axis;
	ry: Axis;
	rz: Axis;
	bp: number | null;
	bx: Axis;
	by: Axis;
	bz: Axis;
	tempDc: number | null;
	accepted: number | null;
}

const vector = (x: Axis, y: Axis, z: Axis): Counts | null =>
	x === null || y === null || z === null ? null : [x, y, z];

function toPulse(r: RawPulse): DriftPulse {
	const before = vector(r.bx, r.by, r.bz);
	const known = r.bp === 1 || r.bp === -1;
	return {
		...{ nodeId: r.nodeId, boot: r.boot, seq: r.seq, atMs: r.atMs, source: r.source },
		set: vector(r.sx, r.sy, r.sz),
		reset: vector(r.rx, r.ry, r.rz),
		// Polarity 0 = the node does not know: what it read before then says nothing.
		before: before !== null && known ? { polarity: r.bp as 1 | -1, counts: before } : null,
		tempC: r.tempDc === null ? null : r.tempDc / 10,
		accepted: r.accepted === 1
	};
}

const PULSE = `p.node_id AS nodeId, p.boot, p.seq, p.at_ms AS atMs, p.source, p.set_x AS sx, p.set_y AS sy, p.set_z AS sz,
	p.reset_x AS rx, p.reset_y AS ry, p.reset_z AS rz, p.before_p AS bp, p.before_x AS bx, p.before_y AS \`by\`, p.before_z AS bz,
	p.temp_dc AS tempDc, p.accepted`;

/** Pulses of nodes with at_ms in [fromMs, toMs) that move states, by node and time. */
export async function pulses(
	sql: Sql,
	nodeIds: readonly number[],
	fromMs: number,
	toMs: number
): Promise<DriftPulse[]> {
	if (nodeIds.length === 0) return [];
	const rows = await select<RawPulse>(
		sql,
		`SELECT ${PULSE} FROM pulse p WHERE p.node_id IN (?) AND p.at_ms >= ? AND p.at_ms < ? AND p.moving = 1
		 ORDER BY p.node_id, p.at_ms, p.boot, p.seq`,
		[nodeIds, fromMs, toMs]
	);
	return rows.map(toPulse);
}

/** Pulses by key. */
export async function pulsesByKey(
	sql: Sql,
	keys: readonly { nodeId: number; boot: number; seq: number }[]
): Promise<DriftPulse[]> {
	if (keys.length === 0) return [];
	const rows = await select<RawPulse>(
		sql,
		`SELECT ${PULSE} FROM pulse p WHERE (p.node_id, p.boot, p.seq) IN (?)`,
		[keys.map(({ nodeId, boot, seq }) => [nodeId, boot, seq])]
	);
	return rows.map(toPulse);
}

export interface ReferenceInForce {
	id: number;
	nodeId: number;
	atMs: number;
	fieldMg: Vec3;
	offsetMg: Vec3 | null;
	tempC: number | null;
}

interface RawReference {
	id: number;
	nodeId: number;
	atMs: number;
	x: number;
	y: number;
	z: number;
	ox: number | null;
	oy: number | null;
	oz: number | null;
	tempC: number | null;
}

/** The newest accepted reference of each node learned before `toMs` in the bay where it lies now. */
export async function references(
	sql: Sql,
	nodeIds: readonly number[],
	toMs: number
): Promise<Map<number, ReferenceInForce>> {
	if (nodeIds.length === 0) return new Map();
	const rows = await select<RawReference>(
		sql,
		`SELECT r.id, r.node_id AS nodeId, r.learned_at_ms AS atMs, r.x_mg AS x, r.y_mg AS y, r.z_mg AS z,
			r.offset_x_mg AS ox, r.offset_y_mg AS oy, r.offset_z_mg AS oz, r.temp_c AS tempC
		 FROM reference r JOIN node n ON n.id = r.node_id AND n.bay_id = r.bay_id
		 WHERE r.node_id IN (?) AND r.accepted_at_ms IS NOT NULL AND r.learned_at_ms < ?
			AND r.learned_at_ms >= COALESCE(n.placed_at_ms, 0)
		 ORDER BY r.learned_at_ms, r.id`,
		[nodeIds, toMs]
	);
	return new Map(
		rows.map(({ id, nodeId, atMs, x, y, z, ox, oy, oz, tempC }) => [
			nodeId,
			{ id, nodeId, atMs, fieldMg: [x, y, z], offsetMg: vector(ox, oy, oz), tempC }
		])
	);
}

/** Overrides by name in force at `atMs`; a node's own come after its site's. */
export async function overrides(
	sql: Sql,
	siteId: number,
	names: readonly string[],
	atMs: number
): Promise<{ nodeId: number | null; name: string; value: string }[]> {
	return await select(
		sql,
		`SELECT node_id AS nodeId, name, value FROM parameter
		 WHERE site_id = ? AND name IN (?) AND from_ms <= ? AND (until_ms IS NULL OR until_ms > ?)
		 ORDER BY node_id IS NOT NULL, id`,
		[siteId, names, atMs, atMs]
	);
}
