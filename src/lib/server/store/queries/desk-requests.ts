import { and, eq, isNull } from 'drizzle-orm';
import { person, personSite } from '../schema';
import type { Db } from './people';

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
