import { ZERO, type Vec3 } from '$lib/magnetics/vector';
import type { Cause } from '$lib/drift/types';
import { run, select, type Sql } from './bulk';

type PairCause = 'bridge' | 'film' | 'gain_or_field' | 'tilt' | 'steel_or_works';

/** One row of `drift_pair`. */
export interface PairRow {
	nodeId: number;
	boot: number;
	seq: number;
	atMs: number;
	vacant: boolean;
	settled: boolean;
	tempC: number | null;
	fieldMg: Vec3;
	offsetMg: Vec3;
	filmMg: Vec3 | null;
	bridgeChangeMg: Vec3 | null;
	surroundingsChangeMg: Vec3 | null;
	named: { cause: Cause; magnitudeMg: number } | null;
}

/** The same with the command that it answered. */
export interface ToldPair extends Omit<PairRow, 'named'> {
	cause: string | null;
	byActor: string | null;
	named: { cause: PairCause; magnitudeMg: number } | null;
}

const MOST_UG = 8_388_607;
const ug = (mg: number): number => Math.min(MOST_UG, Math.max(-MOST_UG, Math.round(mg * 1000)));
const ugs = (v: Vec3 | null) => (v === null ? [null, null, null] : v.map(ug));

const VALUES = [
	...['at_ms', 'vacant', 'settled', 'temp_cc'],
	...['field', 'offset', 'film', 'bridge', 'surroundings'].flatMap((name) =>
		['x', 'y', 'z'].map((axis) => `${name}_${axis}_ug`)
	),
	...['named', 'named_ug']
];

export async function write(sql: Sql, rows: readonly PairRow[]): Promise<void> {
	await insert(sql, rows, VALUES.map((column) => `${column} = VALUES(${column})`).join(', '));
}

/** Leaves a pair alone that is told already: the closing of its hour knew more. */
export async function writeNew(sql: Sql, rows: readonly PairRow[]): Promise<void> {
	await insert(sql, rows, 'node_id = VALUES(node_id)');
}

async function insert(sql: Sql, rows: readonly PairRow[], onDuplicate: string): Promise<void> {
	if (rows.length === 0) return;
	await run(
		sql,
		`INSERT INTO drift_pair (node_id, boot, seq, ${VALUES.join(', ')}) VALUES ?
		 ON DUPLICATE KEY UPDATE ${onDuplicate}`,
		[
			rows.map((r) => [
				...[r.nodeId, r.boot, r.seq, r.atMs, r.vacant, r.settled],
				r.tempC === null ? null : Math.round(r.tempC * 100),
				...ugs(r.fieldMg),
				...ugs(r.offsetMg),
				...ugs(r.filmMg),
				...ugs(r.bridgeChangeMg),
				...ugs(r.surroundingsChangeMg),
				r.named?.cause ?? null,
				r.named === null ? null : ug(r.named.magnitudeMg)
			])
		]
	);
}

interface Raw {
	nodeId: number;
	boot: number;
	seq: number;
	atMs: number;
	vacant: number;
	settled: number;
	tempCc: number | null;
	named: PairCause | null;
	namedUg: number | null;
	cause: string | null;
	byActor: string | null;
	[axis: string]: unknown;
}

function vector(row: Raw, name: string): Vec3 | null {
	const [x, y, z] = ['x', 'y', 'z'].map((axis) => row[`${name}_${axis}_ug`] as number | null);
	if (typeof x !== 'number' || typeof y !== 'number' || typeof z !== 'number') return null;
	return [x / 1000, y / 1000, z / 1000];
}

function toPair(row: Raw): ToldPair {
	const { nodeId, boot, seq, atMs, cause, byActor, named, namedUg } = row;
	return {
		...{ nodeId, boot, seq, atMs, cause, byActor },
		vacant: row.vacant === 1,
		settled: row.settled === 1,
		tempC: row.tempCc === null ? null : row.tempCc / 100,
		fieldMg: vector(row, 'field') ?? ZERO,
		offsetMg: vector(row, 'offset') ?? ZERO,
		filmMg: vector(row, 'film'),
		bridgeChangeMg: vector(row, 'bridge'),
		surroundingsChangeMg: vector(row, 'surroundings'),
		named: named === null || namedUg === null ? null : { cause: named, magnitudeMg: namedUg / 1000 }
	};
}

const SELECT = `SELECT d.node_id AS nodeId, d.boot, d.seq, d.at_ms AS atMs, d.vacant, d.settled, d.temp_cc AS tempCc,
	${VALUES.filter((column) => column.endsWith('_ug') && column !== 'named_ug')
		.map((column) => `d.${column}`)
		.join(', ')}, d.named, d.named_ug AS namedUg, c.cause, c.by_actor AS byActor
 FROM drift_pair d JOIN pulse p ON p.node_id = d.node_id AND p.boot = d.boot AND p.seq = d.seq
 LEFT JOIN command c ON c.id = p.command_id`;

/** Accepted pairs of one node, newest first. */
export async function ofNode(sql: Sql, nodeId: number, limit: number): Promise<ToldPair[]> {
	const rows = await select<Raw>(
		sql,
		`${SELECT} WHERE d.node_id = ? ORDER BY d.at_ms DESC LIMIT ?`,
		[nodeId, limit]
	);
	return rows.map(toPair);
}

/** Accepted pairs of nodes at or after `afterMs` (event time), oldest first. */
export async function since(
	sql: Sql,
	nodeIds: readonly number[],
	afterMs: number
): Promise<ToldPair[]> {
	if (nodeIds.length === 0) return [];
	const rows = await select<Raw>(
		sql,
		`${SELECT} WHERE d.node_id IN (?) AND d.at_ms >= ? ORDER BY d.at_ms, d.node_id`,
		[nodeIds, afterMs]
	);
	return rows.map(toPair);
}
