import type { VisitOutcome } from '$lib/schemas/visit-kinds';
import { endsRequest } from '$lib/schemas/visit-kinds';
import type { Sql } from '$lib/server/store/queries/bulk';
import * as notices from '$lib/server/store/queries/notices';
import { select } from '$lib/server/store/queries/bulk';

/** What a history reads; screens have words of their own for the codes. */
export const OUTCOME_TEXT: Record<VisitOutcome, string> = {
	cured: 'cured on the spot',
	cell_changed: 'cell changed',
	node_swapped: 'node swapped',
	obstacle_removed: 'magnet or steel taken away',
	to_be_swapped: 'node is to be swapped',
	nothing_found: 'nothing found',
	not_reached: 'not reached',
	other: 'seen to'
};

export const outcomeText = (outcome: VisitOutcome, note: string): string =>
	note === '' ? OUTCOME_TEXT[outcome] : `${OUTCOME_TEXT[outcome]}: ${note}`;

/** Open notices of a bay, locked; before anything else of the visit, as the notices' own work locks them. */
export async function lockNotices(sql: Sql, bayId: number): Promise<notices.OpenRow[]> {
	const rows = await select<{ id: number }>(
		sql,
		'SELECT id FROM notice WHERE bay_id = ? AND closed_at_ms IS NULL',
		[bayId]
	);
	return await notices.openByIds(
		sql,
		rows.map(({ id }) => id)
	);
}

/**
 * Closes what a visit has seen to; one that told of a film refresh due still waits for its proof. The entry
 * names the visit and what was done; who was there stands in the visit, for those who may know it.
 */
export async function settle(
	sql: Sql,
	open: readonly notices.OpenRow[],
	did: { text: string; outcome: VisitOutcome },
	nowMs: number
): Promise<number> {
	const over = endsRequest(did.outcome) ? open.filter(({ awaitsProof }) => awaitsProof === 0) : [];
	await notices.enter(
		sql,
		open.map(({ id }) => ({ noticeId: id, what: 'comment' as const, detail: did.text })),
		nowMs
	);
	const ids = over.map(({ id }) => id);
	await notices.close(sql, ids, 'visit', nowMs);
	await notices.enter(
		sql,
		ids.map((id) => ({ noticeId: id, what: 'closed' as const, detail: 'visit' })),
		nowMs
	);
	return ids.length;
}
