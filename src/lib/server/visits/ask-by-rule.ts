import type { VisitCause } from '$lib/schemas/visit-kinds';
import { kindsOf } from '$lib/server/notices/kinds';
import type { Sql } from '$lib/server/store/queries/bulk';
import * as requests from '$lib/server/store/queries/visit-requests';
import { callsOf, type Calling } from './calls';

/** What a request by rule is called where its causes are not shown. */
const REASON: Partial<Record<VisitCause, string>> = {
	silent: 'not heard for a day',
	clipped: 'overloaded for a day: a magnet or steel',
	low_cell: 'the cell is low',
	not_cured: 'a film refresh did not cure it'
};
/** Written as the end of a request that nobody had to see to. */
export const HEALED = 'healed by itself';

/**
 * Makes the requests of a site follow its open notices, in the transaction that changed them: causes are
 * added, those that ended are marked, and a request without a cause that nobody has yet is ended.
 */
export async function askByRule(sql: Sql, siteId: number, nowMs: number): Promise<void> {
	const { notices, entries } = await requests.callingNotices(sql, siteId);
	const open = await requests.open(sql, [siteId]);
	if (notices.length === 0 && open.length === 0) return;
	const causes = await requests.causesOf(
		sql,
		open.map(({ id }) => id)
	);
	const bayOf = new Map(open.map(({ id, bayId }) => [id, bayId]));
	const calling: Calling[] = notices.map((notice) => ({
		...{ bayId: notice.bayId, nodeId: notice.nodeId, kinds: kindsOf(notice.kinds) },
		entries: entries
			.filter(({ noticeId }) => noticeId === notice.id)
			.map(({ atMs, kinds }) => ({ atMs, kinds: kindsOf(kinds) }))
	}));
	const held = causes.map((row) => ({ ...row, bayId: bayOf.get(row.requestId) ?? 0 }));
	const calls = callsOf(calling, held, nowMs);
	await requests.endCauses(sql, calls.over, nowMs);
	for (const { bayId, nodeId, cause } of calls.ask)
		await requests.ask(sql, {
			...{ siteId, bayId, nodeId, cause, detail: '', askedBy: null, atMs: nowMs },
			reason: REASON[cause] ?? cause
		});
	for (const request of open) {
		const own = held.filter(({ requestId }) => requestId === request.id);
		const left = own.filter(({ id, endedAtMs }) => endedAtMs === null && !calls.over.includes(id));
		const again = calls.ask.some(({ bayId }) => bayId === request.bayId);
		// One without any cause is of before causes were kept: a person's wish.
		if (own.length > 0 && left.length === 0 && !again && request.takenBy === null)
			await requests.end(sql, request.id, { by: null, atMs: nowMs, outcome: HEALED });
	}
}
