import type { Store } from '$lib/server/store/connect';
import { select, type Sql } from '$lib/server/store/queries/bulk';
import * as refreshes from '$lib/server/store/queries/refreshes';
import { transaction } from '$lib/server/store/transaction';
import { REFRESH_PARAMS } from './params';

/** Pairs older than this are history of another time: an installation that begins enters none of them. */
const LOOK_BACK_MS = 7 * 86_400_000;

interface RulePair {
	nodeId: number;
	siteId: number;
	bayId: number;
	commandId: string;
	cause: string;
	atMs: number;
}

async function notEntered(sql: Sql, nowMs: number): Promise<RulePair[]> {
	return await select<RulePair>(
		sql,
		`SELECT q.node_id AS nodeId, n.site_id AS siteId, n.bay_id AS bayId, LOWER(HEX(q.command_id)) AS commandId, c.cause, q.at_ms AS atMs
		 FROM command c JOIN pulse q ON q.node_id = c.node_id AND q.command_id = c.id AND q.source = 'pair'
		 JOIN node n ON n.id = q.node_id
		 WHERE c.verb = 'pair' AND c.answered_at_ms > ? AND c.cause NOT LIKE 'refresh%' AND n.bay_id IS NOT NULL
			AND q.accepted IS NOT NULL AND NOT EXISTS
			(SELECT 1 FROM refresh r WHERE r.node_id = q.node_id AND r.command_id = q.command_id)
		 ORDER BY q.at_ms LIMIT 500`,
		[nowMs - LOOK_BACK_MS]
	);
}

const WHY: Readonly<Record<string, string>> = {
	calibrate: 'pair by rule: the offset is looked after',
	diagnose: 'pair by rule: what does the drift come from?',
	learning: 'pair at learning: the first offset'
};

/**
 * Every pair is a film refresh (method 2): one that a rule asked for is entered with what it healed, and is
 * proved like the others, by readings of the usual habit.
 */
export async function enterPairs(store: Store, nowMs: number): Promise<number> {
	const pairs = await notEntered(store.pool, nowMs);
	for (const pair of pairs)
		await transaction(store, async ({ sql }) => {
			await enter(sql, pair, nowMs);
		});
	return pairs.length;
}

async function enter(sql: Sql, pair: RulePair, nowMs: number): Promise<void> {
	const { nodeId, siteId, bayId, commandId, atMs } = pair;
	const why = WHY[pair.cause] ?? `pair by rule: ${pair.cause}`;
	const id = await refreshes.insert(sql, {
		...{ nodeId, siteId, bayId, commandId },
		bulkId: null,
		origin: 'pair_rule',
		state: 'obeyed',
		open: false,
		reason: why,
		evidence: JSON.stringify({ rule: pair.cause }),
		askedBy: 'rule',
		askedAtMs: atMs
	});
	const row = await refreshes.lock(sql, id);
	if (row === null) return;
	await refreshes.save(sql, id, {
		...row,
		attempts: 1,
		sentAtMs: atMs,
		obeyedAtMs: atMs,
		pulseAtMs: atMs,
		measureFromMs: atMs + REFRESH_PARAMS.pulseQuietMs
	});
	await refreshes.addTransition(sql, {
		...{ refreshId: id, siteId, nodeId },
		fromState: null,
		toState: 'obeyed',
		byActor: 'rule',
		why,
		atMs: nowMs
	});
}
