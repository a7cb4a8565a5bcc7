import { run, select, type Sql } from './bulk';
import type { REFRESH_ORIGINS, REFRESH_STATES } from '../schema/refresh';

export type RefreshState = (typeof REFRESH_STATES)[number];
export type RefreshOrigin = (typeof REFRESH_ORIGINS)[number];

/** One row of `refresh`; the command's id in hex, flags as booleans. */
export interface RefreshRow {
	id: number;
	siteId: number;
	nodeId: number;
	bayId: number;
	bulkId: number | null;
	origin: RefreshOrigin;
	state: RefreshState;
	reason: string;
	/** JSON text. */
	evidence: string;
	askedBy: string;
	askedAtMs: number;
	approvedBy: string | null;
	approvedAtMs: number | null;
	anyHour: boolean;
	waitsFor: string | null;
	waitsSinceMs: number | null;
	commandId: string | null;
	boot: number | null;
	attempts: number;
	sentAtMs: number | null;
	obeyedAtMs: number | null;
	pulseAtMs: number | null;
	measureFromMs: number | null;
	disturbed: boolean;
	stillReadings: number;
	/** JSON text. */
	proof: string | null;
	verdict: string | null;
	visitWanted: boolean;
	endedAtMs: number | null;
	revision: number;
}

const FLAGS = ['anyHour', 'disturbed', 'visitWanted'] as const;
type Raw = Omit<RefreshRow, (typeof FLAGS)[number]> & Record<(typeof FLAGS)[number], number>;

const COLUMNS: readonly (readonly [column: string, name: keyof RefreshRow])[] = [
	['id', 'id'],
	['site_id', 'siteId'],
	['node_id', 'nodeId'],
	['bay_id', 'bayId'],
	['bulk_id', 'bulkId'],
	['origin', 'origin'],
	['state', 'state'],
	['reason', 'reason'],
	['evidence', 'evidence'],
	['asked_by', 'askedBy'],
	['asked_at_ms', 'askedAtMs'],
	['approved_by', 'approvedBy'],
	['approved_at_ms', 'approvedAtMs'],
	['any_hour', 'anyHour'],
	['waits_for', 'waitsFor'],
	['waits_since_ms', 'waitsSinceMs'],
	['boot', 'boot'],
	['attempts', 'attempts'],
	['sent_at_ms', 'sentAtMs'],
	['obeyed_at_ms', 'obeyedAtMs'],
	['pulse_at_ms', 'pulseAtMs'],
	['measure_from_ms', 'measureFromMs'],
	['disturbed', 'disturbed'],
	['still_readings', 'stillReadings'],
	['proof', 'proof'],
	['verdict', 'verdict'],
	['visit_wanted', 'visitWanted'],
	['ended_at_ms', 'endedAtMs'],
	['revision', 'revision']
];
/** Columns of `refresh r`, under the names of RefreshRow. */
export const R = [
	...COLUMNS.map(([column, name]) => `r.${column} AS ${name}`),
	'LOWER(HEX(r.command_id)) AS commandId'
].join(', ');

export function toRow<T extends object>(raw: Raw & T): RefreshRow & T {
	const flags = Object.fromEntries(FLAGS.map((name) => [name, Number(raw[name]) === 1]));
	return { ...raw, ...flags } as RefreshRow & T;
}

/** Rows with more columns beside those of `refresh r`. */
export async function read<T extends object>(
	sql: Sql,
	more: string,
	rest: string,
	values: readonly unknown[]
): Promise<(RefreshRow & T)[]> {
	const rows = await select<Raw & T>(sql, `SELECT ${R}${more} FROM refresh r ${rest}`, values);
	return rows.map(toRow);
}

/** The row, locked until the transaction ends. */
export async function lock(sql: Sql, id: number): Promise<RefreshRow | null> {
	return (await read(sql, '', 'WHERE r.id = ? FOR UPDATE', [id]))[0] ?? null;
}

export interface NewRefresh {
	siteId: number;
	nodeId: number;
	bayId: number;
	bulkId: number | null;
	origin: RefreshOrigin;
	state: RefreshState;
	/** Takes the node's one open place. */
	open: boolean;
	reason: string;
	evidence: string;
	askedBy: string;
	askedAtMs: number;
	commandId: string | null;
}

/** Throws ER_DUP_ENTRY when the node has an open one. */
export async function insert(sql: Sql, n: NewRefresh): Promise<number> {
	const { insertId } = await run(
		sql,
		`INSERT INTO refresh (site_id, node_id, bay_id, bulk_id, origin, state, open_node_id, reason, evidence,
			asked_by, asked_at_ms, command_id) VALUES (?)`,
		[
			[
				n.siteId,
				n.nodeId,
				n.bayId,
				n.bulkId,
				n.origin,
				n.state,
				n.open ? n.nodeId : null,
				n.reason.slice(0, 400),
				n.evidence,
				n.askedBy,
				n.askedAtMs,
				n.commandId === null ? null : Buffer.from(n.commandId, 'hex')
			]
		]
	);
	return insertId;
}

export type Saved = Omit<
	RefreshRow,
	| 'id'
	| 'siteId'
	| 'nodeId'
	| 'bayId'
	| 'bulkId'
	| 'origin'
	| 'reason'
	| 'evidence'
	| 'askedBy'
	| 'askedAtMs'
	| 'revision'
>;

const SAVED = [
	'state',
	'approvedBy',
	'approvedAtMs',
	'anyHour',
	'waitsFor',
	'waitsSinceMs',
	'boot',
	'attempts',
	'sentAtMs',
	'obeyedAtMs',
	'pulseAtMs',
	'measureFromMs',
	'disturbed',
	'stillReadings',
	'proof',
	'verdict',
	'visitWanted',
	'endedAtMs'
] as const satisfies readonly (keyof Saved)[];
const SET = SAVED.map((name) => `${COLUMNS.find(([, n]) => n === name)?.[0] ?? name} = ?`);

/** Writes what a step changed; an end frees the node's place for the next order. */
export async function save(sql: Sql, id: number, row: Saved): Promise<void> {
	await run(
		sql,
		`UPDATE refresh SET ${SET.join(', ')}, command_id = ?, open_node_id = IF(? IS NULL, open_node_id, NULL),
			revision = revision + 1 WHERE id = ?`,
		[
			...SAVED.map((name) => row[name]),
			row.commandId === null ? null : Buffer.from(row.commandId, 'hex'),
			row.endedAtMs,
			id
		]
	);
}

export interface TransitionRow {
	id: number;
	refreshId: number;
	siteId: number;
	nodeId: number;
	fromState: RefreshState | null;
	toState: RefreshState;
	byActor: string;
	why: string;
	atMs: number;
}

export async function addTransition(sql: Sql, t: Omit<TransitionRow, 'id'>): Promise<void> {
	await run(
		sql,
		'INSERT INTO refresh_transition (refresh_id, site_id, node_id, from_state, to_state, by_actor, why, at_ms) VALUES (?)',
		[
			[
				t.refreshId,
				t.siteId,
				t.nodeId,
				t.fromState,
				t.toState,
				t.byActor,
				t.why.slice(0, 400),
				t.atMs
			]
		]
	);
}

const T =
	'id, refresh_id AS refreshId, site_id AS siteId, node_id AS nodeId, from_state AS fromState, to_state AS toState, by_actor AS byActor, why, at_ms AS atMs';

export async function transitions(sql: Sql, refreshId: number): Promise<TransitionRow[]> {
	return await select(sql, `SELECT ${T} FROM refresh_transition WHERE refresh_id = ? ORDER BY id`, [
		refreshId
	]);
}

/** Steps that no subscriber has taken yet, oldest first, locked: several subscribers' copies take turns. */
export async function untold(sql: Sql, limit: number): Promise<TransitionRow[]> {
	return await select(
		sql,
		`SELECT ${T} FROM refresh_transition WHERE told_at_ms IS NULL ORDER BY id LIMIT ? FOR UPDATE SKIP LOCKED`,
		[limit]
	);
}

export async function markTold(sql: Sql, ids: readonly number[], nowMs: number): Promise<void> {
	if (ids.length > 0)
		await run(sql, 'UPDATE refresh_transition SET told_at_ms = ? WHERE id IN (?)', [nowMs, ids]);
}

/** How many film refreshes of a node in a row were not cured, since one was proved or a visit was ended. */
export async function notCuredInRow(sql: Sql, nodeId: number, bayId: number): Promise<number> {
	const rows = await select<{ n: number }>(
		sql,
		`SELECT COUNT(*) AS n FROM refresh WHERE node_id = ? AND state = 'not_cured' AND origin <> 'pair_rule' AND ended_at_ms > GREATEST(
			COALESCE((SELECT MAX(ended_at_ms) FROM refresh WHERE node_id = ? AND state = 'proved'), 0),
			COALESCE((SELECT MAX(ended_at_ms) FROM visit_request WHERE bay_id = ?), 0))`,
		[nodeId, nodeId, bayId]
	);
	return Number(rows[0]?.n ?? 0);
}
