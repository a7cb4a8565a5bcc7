import { run, select, type Sql } from '$lib/server/store/queries/bulk';
import type { RefreshRow } from '$lib/server/store/queries/refreshes';

const personOf = (actor: string | null): number | null =>
	actor?.startsWith('person:') === true ? Number(actor.slice('person:'.length)) : null;

/** One open request a bay: what no pulse cures is looked at by a person. */
export async function sendSomeone(
	sql: Sql,
	row: Pick<RefreshRow, 'siteId' | 'bayId' | 'nodeId' | 'approvedBy' | 'askedBy'>,
	why: string,
	atMs: number
): Promise<void> {
	const there = await select<{ id: number }>(
		sql,
		'SELECT id FROM visit_request WHERE bay_id = ? AND ended_at_ms IS NULL FOR UPDATE',
		[row.bayId]
	);
	if (there.length > 0) return;
	const askedBy = personOf(row.approvedBy) ?? personOf(row.askedBy);
	await run(
		sql,
		'INSERT INTO visit_request (site_id, bay_id, node_id, reason, asked_by, asked_at_ms) VALUES (?, ?, ?, ?, (SELECT id FROM person WHERE id = ?), ?)',
		[row.siteId, row.bayId, row.nodeId, `film refresh: ${why}`.slice(0, 400), askedBy, atMs]
	);
}
