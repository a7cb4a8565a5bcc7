import { and, eq, isNull } from 'drizzle-orm';
import { person, personSite, visitRequest } from '../schema';
import type { Db } from './people';

/** The open request of a bay, if any. */
export async function openOfBay(db: Db, bayId: number) {
	const rows = await db
		.select()
		.from(visitRequest)
		.where(and(eq(visitRequest.bayId, bayId), isNull(visitRequest.endedAtMs)))
		.for('update');
	return rows[0] ?? null;
}

export async function create(
	db: Db,
	wanted: {
		siteId: number;
		bayId: number;
		nodeId: number | null;
		reason: string;
		/** null = a rule. */
		askedBy: number | null;
		askedAtMs: number;
	}
): Promise<number> {
	const [{ insertId }] = await db.insert(visitRequest).values(wanted);
	return insertId;
}

export async function byId(db: Db, siteId: number, id: number) {
	const rows = await db
		.select()
		.from(visitRequest)
		.where(and(eq(visitRequest.id, id), eq(visitRequest.siteId, siteId)))
		.for('update');
	return rows[0] ?? null;
}

export async function hold(db: Db, id: number, by: number | null, atMs: number): Promise<void> {
	await db
		.update(visitRequest)
		.set({ takenBy: by, takenAtMs: by === null ? null : atMs })
		.where(eq(visitRequest.id, id));
}

export async function end(
	db: Db,
	id: number,
	ended: { by: number; atMs: number; outcome: string }
): Promise<void> {
	await db
		.update(visitRequest)
		.set({ endedBy: ended.by, endedAtMs: ended.atMs, outcome: ended.outcome })
		.where(eq(visitRequest.id, id));
}

/** People of the maintenance role who have the site: they get the mail. */
export async function fitters(db: Db, siteId: number) {
	const rows = await db
		.select({
			email: person.email,
			name: person.name,
			demo: person.demo,
			all: person.allSites,
			siteId: personSite.siteId
		})
		.from(person)
		.leftJoin(personSite, and(eq(personSite.personId, person.id), eq(personSite.siteId, siteId)))
		.where(and(eq(person.role, 'maintenance'), isNull(person.switchedOffAtMs)));
	return rows.filter((row) => row.all || row.siteId !== null);
}
