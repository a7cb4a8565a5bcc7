import { and, eq, inArray, isNull, sql } from 'drizzle-orm';
import type { Database } from '../connect';
import { apiKey, apiKeySite, person, personSite } from '../schema';

/** A connection or an open transaction. */
export type Db = Pick<Database, 'select' | 'insert' | 'update' | 'delete' | 'execute'>;
export type PersonRow = typeof person.$inferSelect;
export type Role = PersonRow['role'];

/** Everything that decides who may do what; small tables, read whole. */
export async function reachRows(db: Db) {
	const [people, personSites, keys, keySites] = await Promise.all([
		db
			.select({
				id: person.id,
				name: person.name,
				role: person.role,
				allSites: person.allSites,
				sessionVersion: person.sessionVersion,
				mustChangePassword: person.mustChangePassword
			})
			.from(person)
			.where(isNull(person.switchedOffAtMs)),
		db.select({ personId: personSite.personId, siteId: personSite.siteId }).from(personSite),
		db.select().from(apiKey).where(isNull(apiKey.revokedAtMs)),
		db.select().from(apiKeySite)
	]);
	return { people, personSites, keys, keySites };
}
export type ReachRows = Awaited<ReturnType<typeof reachRows>>;

/** Addresses are compared without regard to case. */
export const emailKey = (email: string): string => email.trim().toLowerCase();

export async function byEmail(db: Db, email: string): Promise<PersonRow | null> {
	const rows = await db
		.select()
		.from(person)
		.where(eq(person.email, emailKey(email)));
	return rows[0] ?? null;
}

export async function byId(db: Db, id: number): Promise<PersonRow | null> {
	const rows = await db.select().from(person).where(eq(person.id, id));
	return rows[0] ?? null;
}

export async function list(db: Db) {
	const people = await db
		.select({
			id: person.id,
			email: person.email,
			name: person.name,
			initials: person.initials,
			role: person.role,
			allSites: person.allSites,
			demo: person.demo,
			invited: sql<number>`${person.passwordHash} is null`,
			createdAtMs: person.createdAtMs,
			switchedOffAtMs: person.switchedOffAtMs
		})
		.from(person)
		.orderBy(person.name);
	const sites = await db.select().from(personSite);
	return people.map((p) => ({
		...p,
		invited: Number(p.invited) === 1,
		siteIds: sites.filter((s) => s.personId === p.id).map((s) => s.siteId)
	}));
}

export interface NewPerson {
	email: string;
	name: string;
	initials: string;
	role: Role;
	/** 'all' or site ids. */
	sites: 'all' | readonly number[];
	passwordHash?: string;
	mustChangePassword?: boolean;
	demo?: boolean;
}

export async function create(db: Db, p: NewPerson, nowMs: number): Promise<number> {
	const [{ insertId }] = await db.insert(person).values({
		email: emailKey(p.email),
		name: p.name,
		initials: p.initials,
		role: p.role,
		allSites: p.sites === 'all',
		passwordHash: p.passwordHash ?? null,
		mustChangePassword: p.mustChangePassword ?? false,
		demo: p.demo ?? false,
		createdAtMs: nowMs
	});
	await setSites(db, insertId, p.sites);
	return insertId;
}

async function setSites(db: Db, personId: number, sites: NewPerson['sites']): Promise<void> {
	const siteIds = sites === 'all' ? [] : [...sites];
	const had = await db
		.select({ siteId: personSite.siteId })
		.from(personSite)
		.where(eq(personSite.personId, personId));
	const before = had.map((row) => row.siteId);
	const gone = before.filter((id) => !siteIds.includes(id));
	const fresh = siteIds.filter((id) => !before.includes(id));
	if (gone.length > 0) {
		await db
			.delete(personSite)
			.where(and(eq(personSite.personId, personId), inArray(personSite.siteId, gone)));
	}
	if (fresh.length > 0) {
		await db.insert(personSite).values(fresh.map((siteId) => ({ personId, siteId })));
	}
}

const raised = sql`${person.sessionVersion} + 1`;

/** Role or reach changed: every session of the person is over. */
export async function setReach(
	db: Db,
	id: number,
	reach: { role: Role; sites: NewPerson['sites'] }
): Promise<void> {
	await db
		.update(person)
		.set({ role: reach.role, allSites: reach.sites === 'all', sessionVersion: raised })
		.where(eq(person.id, id));
	await setSites(db, id, reach.sites);
}

export async function switchOff(db: Db, id: number, nowMs: number): Promise<void> {
	await db
		.update(person)
		.set({ switchedOffAtMs: nowMs, sessionVersion: raised })
		.where(eq(person.id, id));
}

export async function switchOn(db: Db, id: number): Promise<void> {
	await db
		.update(person)
		.set({ switchedOffAtMs: null, sessionVersion: raised })
		.where(eq(person.id, id));
}

/** Ends every session; the caller gives the one who changed it a new one. */
export async function setPassword(db: Db, id: number, passwordHash: string): Promise<void> {
	await db
		.update(person)
		.set({ passwordHash, mustChangePassword: false, sessionVersion: raised })
		.where(eq(person.id, id));
}

/** The language of a person's sheets and mail. */
export async function setLanguage(db: Db, id: number, language: string): Promise<void> {
	await db.update(person).set({ language }).where(eq(person.id, id));
}

/** People who administer: told when a key's maker leaves. */
export async function admins(db: Db) {
	return await db
		.select({ id: person.id, email: person.email, name: person.name, demo: person.demo })
		.from(person)
		.where(and(eq(person.role, 'admin'), isNull(person.switchedOffAtMs)));
}
