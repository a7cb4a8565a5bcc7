import type { RecordingIn } from '$lib/schemas/visits';
import { checksOf, endsRequest, type VisitOutcome } from '$lib/schemas/visit-kinds';
import type { Sql } from '$lib/server/store/queries/bulk';
import * as records from '$lib/server/store/queries/visit-records';
import * as requests from '$lib/server/store/queries/visit-requests';
import * as visits from '$lib/server/store/queries/visits';
import { lockNotices, outcomeText, settle } from './settle';
import { endIfDone } from './take';

/** `taken`: it changes the stop; `added`: the stop was closed by then, it is kept beside. */
export type Recorded =
	| { ok: true; verdict: 'taken' | 'added'; again: boolean }
	| { ok: false; why: 'not_there' | 'not_yours' | 'id_used' | 'no_such_check' };

export interface Recording {
	siteId: number;
	visitId: number;
	/** UUID, made by the phone. */
	id: string;
	/** Who is signed in. */
	me: number;
	body: RecordingIn;
}

/**
 * Takes what was recorded at a stop, once by its id. It is taken only from the person who recorded it. What
 * comes when somebody else has closed the stop is kept as an addition; nothing of it is lost.
 */
export async function record(sql: Sql, r: Recording, nowMs: number): Promise<Recorded> {
	if (r.body.by !== r.me) return { ok: false, why: 'not_yours' };
	await visits.lockWalk(sql, r.visitId);
	const bay = await visits.bayOfStop(sql, r.body.stop);
	const open = bay !== null && r.body.kind === 'outcome' ? await lockNotices(sql, bay) : [];
	const stop = await visits.lockStop(sql, { ...r, stopId: r.body.stop });
	if (stop === null) return { ok: false, why: 'not_there' };
	const before = await records.byId(sql, r.id);
	if (before !== null) return repeated(before, r);
	const [request] = await requests.lock(sql, r.siteId, [stop.requestId]);
	if (request === undefined) return { ok: false, why: 'not_there' };
	if (r.body.kind === 'tick' && !(await isCheckOf(sql, stop.requestId, r.body.code)))
		return { ok: false, why: 'no_such_check' };
	const madeAtMs = Math.min(nowMs, Math.max(r.body.madeAtMs, stop.walkTakenAtMs));
	const closes = r.body.kind === 'outcome';
	const closed = stop.outcome !== null;
	const added = closes ? closed || request.endedAtMs !== null : closed && stop.endedBy !== r.me;
	await records.insert(sql, {
		...{ id: r.id, stopId: stop.id, personId: r.me, kind: r.body.kind, ...detailOf(r.body) },
		...{ madeAtMs, takenAtMs: nowMs, added }
	});
	if (r.body.kind === 'outcome' && !added) {
		const did = { visitId: r.visitId, outcome: r.body.code, note: r.body.text };
		await close(sql, { stop, did, me: r.me, madeAtMs }, nowMs);
		const text = `visit ${did.visitId}: ${outcomeText(did.outcome, did.note)}`;
		await settle(sql, open, { text, outcome: did.outcome }, nowMs);
	}
	return { ok: true, verdict: added ? 'added' : 'taken', again: false };
}

function repeated(before: records.RecordingRow, r: Recording): Recorded {
	const same =
		before.stopId === r.body.stop &&
		before.kind === r.body.kind &&
		(before.personId ?? r.me) === r.me;
	return same
		? { ok: true, verdict: before.added === 1 ? 'added' : 'taken', again: true }
		: { ok: false, why: 'id_used' };
}

function detailOf(body: RecordingIn): { code: string; amount: number; text: string } {
	switch (body.kind) {
		case 'tick':
			return { code: body.code, amount: body.done ? 1 : 0, text: '' };
		case 'part':
			return { code: body.code, amount: body.count, text: '' };
		case 'note':
			return { code: '', amount: 0, text: body.text };
		case 'outcome':
			return { code: body.code, amount: 0, text: body.text };
	}
}

/** A check belongs to a stop by any cause that it ever had: the phone may not know of the last change. */
async function isCheckOf(sql: Sql, requestId: number, code: string): Promise<boolean> {
	const causes = await requests.causesOf(sql, [requestId]);
	const known = causes.length === 0 ? (['by_hand'] as const) : causes.map(({ cause }) => cause);
	return (checksOf(known) as string[]).includes(code);
}

interface Closing {
	stop: visits.StopRow;
	did: { visitId: number; outcome: VisitOutcome; note: string };
	me: number;
	madeAtMs: number;
}

async function close(sql: Sql, { stop, did, me, madeAtMs }: Closing, nowMs: number): Promise<void> {
	await visits.endStop(sql, stop.id, {
		...{ outcome: did.outcome, note: did.note, by: me, atMs: madeAtMs, recordedAtMs: nowMs }
	});
	if (endsRequest(did.outcome)) {
		const outcome = outcomeText(did.outcome, did.note);
		await requests.end(sql, stop.requestId, { by: me, atMs: nowMs, outcome });
	} else {
		await requests.hold(sql, [stop.requestId], null, nowMs);
		if (did.outcome === 'to_be_swapped')
			await requests.addCause(sql, stop.requestId, {
				...{ cause: 'swap', detail: did.note, atMs: nowMs }
			});
	}
	await endIfDone(sql, did.visitId, nowMs);
}
