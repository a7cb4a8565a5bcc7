import { and, asc, eq, gt, isNotNull, isNull, sql } from 'drizzle-orm';
import { bay, bayState, event, lastLook, person, visitRequest } from '../schema';
import type { Db } from './people';

/** When this person last looked at the site's plan; null the first time. */
export async function last(db: Db, personId: number, siteId: number) {
	const rows = await db
		.select({ atMs: lastLook.atMs, changeId: lastLook.changeId })
		.from(lastLook)
		.where(and(eq(lastLook.personId, personId), eq(lastLook.siteId, siteId)));
	return rows[0] ?? null;
}

export async function mark(
	db: Db,
	look: { personId: number; siteId: number; changeId: number; atMs: number }
): Promise<void> {
	await db
		.insert(lastLook)
		.values(look)
		.onDuplicateKeyUpdate({ set: { changeId: look.changeId, atMs: look.atMs } });
}

/** What became so since an instant and is still so, by bay code; and how many vehicles came and left. */
export async function since(db: Db, siteId: number, atMs: number, changeId: number) {
	const [bays, movements] = await Promise.all([
		db
			.select({
				code: bay.code,
				state: bayState.state,
				doubtReason: bayState.doubtReason,
				doubtSinceMs: bayState.doubtSinceMs,
				sinceMs: bayState.sinceMs
			})
			.from(bayState)
			.innerJoin(bay, eq(bay.id, bayState.bayId))
			.where(
				and(eq(bayState.siteId, siteId), eq(bay.removedAtMs, 0), gt(bayState.changeId, changeId))
			)
			.orderBy(asc(bay.code)),
		db
			.select({ type: event.type, n: sql<number>`count(*)` })
			.from(event)
			.where(and(eq(event.siteId, siteId), gt(event.id, changeId), eq(event.late, false)))
			.groupBy(event.type)
	]);
	const count = (type: string) => Number(movements.find((m) => m.type === type)?.n ?? 0);
	return {
		doubtful: bays
			.filter((b) => b.doubtReason !== null && (b.doubtSinceMs ?? 0) > atMs)
			.map(({ code, doubtReason }) => ({ code, reason: doubtReason ?? '' })),
		unknown: bays
			.filter((b) => b.state === 'unknown' && (b.sinceMs ?? 0) > atMs)
			.map(({ code }) => code),
		arrivals: count('arrival'),
		departures: count('departure')
	};
}

/** Requests to send someone that are not ended, with who asked and who has it. */
export async function openRequests(db: Db, siteId: number) {
	const rows = await db
		.select({
			id: visitRequest.id,
			bay: bay.code,
			reason: visitRequest.reason,
			askedAtMs: visitRequest.askedAtMs,
			takenAtMs: visitRequest.takenAtMs,
			takenBy: visitRequest.takenBy,
			takerName: person.name,
			takerInitials: person.initials,
			askedBy: visitRequest.askedBy
		})
		.from(visitRequest)
		.innerJoin(bay, eq(bay.id, visitRequest.bayId))
		.leftJoin(person, eq(person.id, visitRequest.takenBy))
		.where(and(eq(visitRequest.siteId, siteId), isNull(visitRequest.endedAtMs)))
		.orderBy(asc(visitRequest.askedAtMs));
	return rows;
}
export type OpenRequest = Awaited<ReturnType<typeof openRequests>>[number];

/** The last ended requests of a site. */
export async function endedRequests(db: Db, siteId: number, limit: number) {
	return await db
		.select({
			id: visitRequest.id,
			bay: bay.code,
			reason: visitRequest.reason,
			askedAtMs: visitRequest.askedAtMs,
			endedAtMs: visitRequest.endedAtMs,
			outcome: visitRequest.outcome
		})
		.from(visitRequest)
		.innerJoin(bay, eq(bay.id, visitRequest.bayId))
		.where(and(eq(visitRequest.siteId, siteId), isNotNull(visitRequest.endedAtMs)))
		.orderBy(sql`${visitRequest.endedAtMs} desc`)
		.limit(limit);
}
