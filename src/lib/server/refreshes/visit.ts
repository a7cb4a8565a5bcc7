import type { Sql } from '$lib/server/store/queries/bulk';
import type { RefreshRow } from '$lib/server/store/queries/refreshes';
import * as requests from '$lib/server/store/queries/visit-requests';

const personOf = (actor: string | null): number | null =>
	actor?.startsWith('person:') === true ? Number(actor.slice('person:'.length)) : null;

/** One open request a bay: what no pulse cures is looked at by a person. */
export async function sendSomeone(
	sql: Sql,
	row: Pick<RefreshRow, 'siteId' | 'bayId' | 'nodeId' | 'approvedBy' | 'askedBy'>,
	why: string,
	atMs: number
): Promise<void> {
	await requests.ask(sql, {
		...{ siteId: row.siteId, bayId: row.bayId, nodeId: row.nodeId, atMs },
		...{ cause: 'not_cured', detail: why, reason: `film refresh: ${why}` },
		askedBy: personOf(row.approvedBy) ?? personOf(row.askedBy)
	});
}
