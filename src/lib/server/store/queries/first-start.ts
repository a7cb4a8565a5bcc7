import { and, count, eq, isNull } from 'drizzle-orm';
import type { Database } from '../connect';
import { apiKey, person, personSite, site, type ROLES } from '../schema';

export interface NewPerson {
	email: string;
	name: string;
	initials: string;
	role: (typeof ROLES)[number];
	allSites: boolean;
	passwordHash: string;
	mustChangePassword: boolean;
	demo: boolean;
}

/** Admins that are not of the demo; 0 = nobody can sign in and make other people. */
export async function countAdmins(db: Database): Promise<number> {
	const [row] = await db
		.select({ n: count() })
		.from(person)
		.where(and(eq(person.role, 'admin'), eq(person.demo, false), isNull(person.switchedOffAtMs)));
	return row?.n ?? 0;
}

export async function countDemoPeople(db: Database): Promise<number> {
	const [row] = await db.select({ n: count() }).from(person).where(eq(person.demo, true));
	return row?.n ?? 0;
}

export async function addPerson(db: Database, who: NewPerson, nowMs: number): Promise<number> {
	const [header] = await db.insert(person).values({ ...who, createdAtMs: nowMs });
	return header.insertId;
}

/** Sites that ever were (a removed one counts: nobody wants the demo back), and living ones of the demo. */
export async function countSites(db: Database): Promise<{ ever: number; demo: number }> {
	const rows = await db.select({ demo: site.demo, removedAtMs: site.removedAtMs }).from(site);
	const living = rows.filter(({ removedAtMs }) => removedAtMs === null);
	return { ever: rows.length, demo: living.filter(({ demo }) => demo).length };
}

/** Marks a site as the demo's and lets the demo's people in. False while it is not there. */
export async function adoptDemoSite(db: Database, slug: string, nowMs: number): Promise<boolean> {
	const [found] = await db.select({ id: site.id }).from(site).where(eq(site.slug, slug));
	if (found === undefined) return false;
	await db.update(site).set({ demo: true }).where(eq(site.id, found.id));
	const people = await db.select({ id: person.id }).from(person).where(eq(person.demo, true));
	for (const { id } of people)
		await db
			.insert(personSite)
			.values({ personId: id, siteId: found.id, lastSeenAtMs: nowMs })
			.onDuplicateKeyUpdate({ set: { siteId: found.id } });
	return true;
}

/** Ends every living key of that name that no person made. */
export async function revokeKeys(db: Database, name: string, nowMs: number): Promise<void> {
	await db
		.update(apiKey)
		.set({ revokedAtMs: nowMs })
		.where(and(eq(apiKey.name, name), isNull(apiKey.makerId), isNull(apiKey.revokedAtMs)));
}

/** Ids of living sites by slug. */
export async function siteIds(db: Database): Promise<Map<string, number>> {
	const rows = await db
		.select({ id: site.id, slug: site.slug })
		.from(site)
		.where(isNull(site.removedAtMs));
	return new Map(rows.map(({ id, slug }) => [slug, id]));
}
