import { randomBytes } from 'node:crypto';
import { run, select, type Sql } from './bulk';

export type Verb = 'set' | 'reset' | 'pair' | 'report';

export interface CommandRow {
	id: Buffer;
	nodeId: number;
	verb: Verb;
	periodS: number | null;
	deltaMg: number | null;
	boot: number;
	cause: string;
	byActor: string;
	createdAtMs: number;
	expiresAtMs: number;
	sentAtMs: number | null;
	sends: number;
	answeredAtMs: number | null;
	outcome: number | null;
}

/** Said of a command whose node started anew before it answered: the node's own word, when it comes, outdoes it. */
export const STARTED_ANEW = 'the node started anew before it could obey';

export interface NewCommand {
	/** 8 bytes; made at random when left out. */
	id?: Buffer;
	nodeId: number;
	verb: Verb;
	report: { periodS: number; deltaMg: number } | null;
	/** The boot last heard: the node obeys no command meant for another. */
	boot: number;
	/** 'ask', 'learning', 'habit', 'calibrate', 'diagnose', 'refresh:<id>' … */
	cause: string;
	byActor: string;
	createdAtMs: number;
	expiresAtMs: number;
}

const COLUMNS =
	'id, node_id AS nodeId, verb, period_s AS periodS, delta_mg AS deltaMg, boot, cause, by_actor AS byActor, created_at_ms AS createdAtMs, expires_at_ms AS expiresAtMs, sent_at_ms AS sentAtMs, sends, answered_at_ms AS answeredAtMs, outcome';

/** Orders a command; the sender picks it up. Returns its id. */
export async function order(sql: Sql, command: NewCommand): Promise<Buffer> {
	const id = command.id ?? randomBytes(8);
	await run(
		sql,
		'INSERT INTO command (id, node_id, verb, period_s, delta_mg, boot, cause, by_actor, created_at_ms, expires_at_ms) VALUES (?)',
		[
			[
				id,
				command.nodeId,
				command.verb,
				command.report?.periodS ?? null,
				command.report?.deltaMg ?? null,
				command.boot,
				command.cause,
				command.byActor,
				command.createdAtMs,
				command.expiresAtMs
			]
		]
	);
	return id;
}

/** Unanswered and not expired, oldest first. */
export async function open(sql: Sql, nowMs: number): Promise<CommandRow[]> {
	return await select(
		sql,
		`SELECT ${COLUMNS} FROM command WHERE answered_at_ms IS NULL AND expires_at_ms > ? ORDER BY created_at_ms LIMIT 5000`,
		[nowMs]
	);
}

export async function find(sql: Sql, ids: readonly Uint8Array[]): Promise<CommandRow[]> {
	if (ids.length === 0) return [];
	return await select(sql, `SELECT ${COLUMNS} FROM command WHERE id IN (?)`, [
		ids.map((id) => Buffer.from(id))
	]);
}

export async function noteSent(sql: Sql, id: Uint8Array, nowMs: number): Promise<void> {
	await run(
		sql,
		'UPDATE command SET sent_at_ms = COALESCE(sent_at_ms, ?), sends = sends + 1 WHERE id = ?',
		[nowMs, Buffer.from(id)]
	);
}

/** The node's answer; the first one counts. */
export async function answer(
	sql: Sql,
	id: Uint8Array,
	nodeId: number,
	answered: { atMs: number; outcome: 0 | 1 | 2; reason: string | null }
): Promise<void> {
	await run(
		sql,
		'UPDATE command SET answered_at_ms = ?, outcome = ?, reason = ? WHERE id = ? AND node_id = ? AND (answered_at_ms IS NULL OR reason = ?)',
		[
			answered.atMs,
			answered.outcome,
			answered.reason?.slice(0, 200) ?? null,
			Buffer.from(id),
			nodeId,
			STARTED_ANEW
		]
	);
}

/** Ends open commands of a node that can no longer be obeyed, as failed with a reason. */
export async function giveUp(
	sql: Sql,
	which: { nodeId: number; verb: Verb | null; otherThanBoot: number | null },
	nowMs: number,
	reason: string
): Promise<void> {
	const verb = which.verb === null ? '' : 'AND verb = ?';
	const boot = which.otherThanBoot === null ? '' : 'AND boot <> ?';
	await run(
		sql,
		`UPDATE command SET answered_at_ms = ?, outcome = 2, reason = ? WHERE node_id = ? AND answered_at_ms IS NULL ${verb} ${boot}`,
		[nowMs, reason, which.nodeId, which.verb, which.otherThanBoot].filter((v) => v !== null)
	);
}

/** The newest `report` command of each node that has one. */
export async function lastReports(sql: Sql, nodeIds: readonly number[]): Promise<CommandRow[]> {
	if (nodeIds.length === 0) return [];
	return await select(
		sql,
		`SELECT ${COLUMNS} FROM command c WHERE c.node_id IN (?) AND c.verb = 'report' AND c.created_at_ms =
			(SELECT MAX(d.created_at_ms) FROM command d WHERE d.node_id = c.node_id AND d.verb = 'report')`,
		[nodeIds]
	);
}
