import * as commands from '$lib/server/store/queries/commands';
import { run, type Sql } from '$lib/server/store/queries/bulk';
import * as facts from '$lib/server/store/queries/refresh-facts';
import * as refreshes from '$lib/server/store/queries/refreshes';
import type { RefreshRow } from '$lib/server/store/queries/refreshes';
import { isEnded, type Course, type Effect, type RefreshEvent, type Stepped } from './course';
import { step } from './lifecycle';
import { REFRESH_PARAMS } from './params';
import { sendSomeone } from './visit';

/** The fast habit while still readings are counted (method 3). */
const FAST_PERIOD_S = 2;
const HABIT_EXPIRES_MS = 86_400_000;

export type Applied = Stepped & { row: RefreshRow | null };

export const courseOf = (row: RefreshRow): Course => ({
	state: row.state,
	askedBy: row.askedBy,
	askedAtMs: row.askedAtMs,
	anyHour: row.anyHour,
	waitsFor: row.waitsFor,
	waitsSinceMs: row.waitsSinceMs,
	commandId: row.commandId,
	boot: row.boot,
	attempts: row.attempts,
	sentAtMs: row.sentAtMs,
	obeyedAtMs: row.obeyedAtMs,
	pulseAtMs: row.pulseAtMs,
	measureFromMs: row.measureFromMs,
	disturbed: row.disturbed,
	stillReadings: row.stillReadings,
	visitWanted: row.visitWanted,
	endedAtMs: row.endedAtMs
});

/**
 * Takes one event of one film refresh: reads it under a lock, steps, writes row and transition, and does
 * what the step asks for, all in the caller's transaction. Whoever comes second sees what the first made
 * of it. `proof` goes with a judgement.
 */
export async function apply(
	sql: Sql,
	id: number,
	event: RefreshEvent,
	proof: string | null = null
): Promise<Applied> {
	const row = await refreshes.lock(sql, id);
	if (row === null) return { ok: false, reason: 'not_in_this_state', row: null };
	const stepped = step(courseOf(row), event, REFRESH_PARAMS);
	if (!stepped.ok) return { ...stepped, row };
	const approval =
		event.kind === 'approve' ? { approvedBy: event.by, approvedAtMs: event.atMs } : {};
	const verdict = event.kind === 'judged' ? { verdict: event.verdict.slice(0, 400) } : {};
	const next: RefreshRow = {
		...row,
		...stepped.course,
		...approval,
		...verdict,
		proof: proof ?? row.proof
	};
	await refreshes.save(sql, id, next);
	if (stepped.transition !== null) await note(sql, next, stepped.transition, event.atMs);
	for (const effect of stepped.effects) await carryOut(sql, next, effect, event.atMs);
	if (isEnded(next.state) && next.bulkId !== null) await endBulk(sql, next.bulkId, event.atMs);
	return { ...stepped, row: next };
}

async function note(
	sql: Sql,
	row: RefreshRow,
	transition: { from: RefreshRow['state']; to: RefreshRow['state']; by: string; why: string },
	atMs: number
): Promise<void> {
	await refreshes.addTransition(sql, {
		refreshId: row.id,
		siteId: row.siteId,
		nodeId: row.nodeId,
		fromState: transition.from,
		toState: transition.to,
		byActor: transition.by,
		why: transition.why,
		atMs
	});
}

async function carryOut(sql: Sql, row: RefreshRow, effect: Effect, atMs: number): Promise<void> {
	const expiresAtMs = atMs + REFRESH_PARAMS.commandMs;
	switch (effect.kind) {
		case 'order_pair':
			await commands.order(sql, {
				id: Buffer.from(effect.commandId, 'hex'),
				nodeId: row.nodeId,
				verb: 'pair',
				report: null,
				boot: effect.boot,
				cause: `refresh:${row.id}`,
				byActor: row.approvedBy ?? 'rule',
				createdAtMs: atMs,
				expiresAtMs
			});
			return;
		case 'order_again':
			await facts.reopenCommand(sql, effect.commandId, {
				boot: effect.boot,
				expiresAtMs,
				unless: commands.STARTED_ANEW
			});
			return;
		case 'give_up_command':
			await facts.endCommand(sql, effect.commandId, atMs, 'no longer wanted');
			return;
		case 'report_fast':
			if (row.origin !== 'pair_rule') await report(sql, row, FAST_PERIOD_S, atMs);
			return;
		case 'report_usual':
			if (row.origin !== 'pair_rule') await report(sql, row, null, atMs);
			return;
		case 'send_someone':
			await sendSomeone(sql, row, effect.why, atMs);
	}
}

/** One open habit a node: a newer wish takes the older one's place. `periodS` null = the usual. */
async function report(
	sql: Sql,
	row: RefreshRow,
	periodS: number | null,
	atMs: number
): Promise<void> {
	const node = await facts.habitOf(sql, row.nodeId);
	if (node?.heardBoot == null) return;
	await commands.giveUp(
		sql,
		{ nodeId: row.nodeId, verb: 'report', otherThanBoot: null },
		atMs,
		'superseded'
	);
	await commands.order(sql, {
		nodeId: row.nodeId,
		verb: 'report',
		report: { periodS: periodS ?? node.usualPeriodS, deltaMg: node.deltaMg },
		boot: node.heardBoot,
		cause: periodS === null ? 'habit' : `refresh:${row.id}`,
		byActor: 'rule',
		createdAtMs: atMs,
		expiresAtMs: atMs + (periodS === null ? HABIT_EXPIRES_MS : REFRESH_PARAMS.commandMs)
	});
}

/** A bulk order is done when the last of its film refreshes has ended. */
async function endBulk(sql: Sql, bulkId: number, atMs: number): Promise<void> {
	await run(
		sql,
		`UPDATE refresh_bulk SET state = IF(state = 'called_off', state, 'done'), ended_at_ms = ? WHERE id = ? AND ended_at_ms IS NULL
			AND NOT EXISTS (SELECT 1 FROM refresh WHERE bulk_id = ? AND ended_at_ms IS NULL)`,
		[atMs, bulkId, bulkId]
	);
}
