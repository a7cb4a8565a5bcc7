import type { Sql } from '$lib/server/store/queries/bulk';
import * as requests from '$lib/server/store/queries/visit-requests';
import * as visits from '$lib/server/store/queries/visits';
import { lockNotices, settle } from './settle';
import { endIfDone } from './take';

export interface Wish {
	siteId: number;
	bayId: number;
	nodeId: number | null;
	reason: string;
	askedBy: number;
}

/** A person's wish for somebody at a bay; null where another person's stands already. */
export async function ask(sql: Sql, wish: Wish, nowMs: number): Promise<number | null> {
	const open = (await requests.open(sql, [wish.siteId])).find(({ bayId }) => bayId === wish.bayId);
	if (open !== undefined) {
		const causes = await requests.causesOf(sql, [open.id]);
		const wished = causes.some(({ cause, endedAtMs }) => cause === 'by_hand' && endedAtMs === null);
		if (wished || causes.length === 0) return null;
	}
	const { id } = await requests.ask(sql, {
		...{ ...wish, cause: 'by_hand', detail: wish.reason, atMs: nowMs }
	});
	return id;
}

/** Ends a request outside the course of a walk, in the person's own words; its notices are settled. */
export async function endByHand(
	sql: Sql,
	o: { siteId: number; id: number; me: number; outcome: string },
	nowMs: number
): Promise<'done' | 'not_there' | 'ended'> {
	if (!Number.isInteger(o.id)) return 'not_there';
	const [row] = await requests.byIds(sql, [o.id]);
	if (row?.siteId !== o.siteId) return 'not_there';
	const open = await lockNotices(sql, row.bayId);
	const [request] = await requests.lock(sql, o.siteId, [o.id]);
	if (request === undefined || request.endedAtMs !== null) return 'ended';
	const stop = await visits.runningStop(sql, o.id);
	const ended = { outcome: 'other', note: o.outcome, by: o.me, atMs: nowMs } as const;
	if (stop !== null) await visits.endStop(sql, stop.id, { ...ended, recordedAtMs: nowMs });
	await requests.end(sql, o.id, { by: o.me, atMs: nowMs, outcome: o.outcome });
	if (stop !== null) await endIfDone(sql, stop.visitId, nowMs);
	await settle(sql, open, { text: o.outcome, outcome: 'other' }, nowMs);
	return 'done';
}
