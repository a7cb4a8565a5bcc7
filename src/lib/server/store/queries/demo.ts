import { and, eq, inArray, isNull, or } from 'drizzle-orm';
import { apiKey, node, person, site } from '../schema';
import * as actRequests from './act-requests';
import * as changes from './changes';
import * as people from './people';
import * as sites from './sites';
import type { Tx } from '../transaction';

/** The name of the simulator's own key: no person made it (launch/demo.ts). */
export const DEMO_KEY = 'demo simulator';

/** Living sites of the demo. */
export async function demoSites(db: people.Db): Promise<{ id: number; slug: string }[]> {
	return await db
		.select({ id: site.id, slug: site.slug })
		.from(site)
		.where(and(eq(site.demo, true), isNull(site.removedAtMs)));
}

/**
 * Takes the demo away whole, in the caller's transaction: its nodes are withdrawn (the pipeline takes the
 * acts, and their connections end), its sites removed, its people switched off, its keys ended.
 */
export async function leave({ db, sql }: Tx, byActor: string, nowMs: number): Promise<string[]> {
	const leaving = await demoSites(db);
	for (const { id } of [...leaving].sort((a, b) => a.id - b.id)) {
		await withdrawNodes(db, id, byActor, nowMs);
		await changes.append(sql, id, [{ kind: 'site', bayId: null, nodeId: null }], nowMs);
		await sites.remove(db, id, nowMs);
	}
	await endKeys(db, nowMs);
	for (const { id } of await demoPeople(db)) await people.switchOff(db, id, nowMs);
	return leaving.map(({ slug }) => slug);
}

async function withdrawNodes(
	db: people.Db,
	siteId: number,
	byActor: string,
	nowMs: number
): Promise<void> {
	const nodes = await db
		.select({ id: node.id, bayId: node.bayId })
		.from(node)
		.where(and(eq(node.siteId, siteId), isNull(node.withdrawnAtMs)));
	for (const { id, bayId } of nodes)
		await actRequests.request(
			db,
			{ siteId, nodeId: id, bayId, kind: 'withdraw', args: {}, atMs: nowMs, byActor },
			nowMs
		);
}

const demoPeople = async (db: people.Db): Promise<{ id: number }[]> =>
	await db
		.select({ id: person.id })
		.from(person)
		.where(and(eq(person.demo, true), isNull(person.switchedOffAtMs)));

/** The simulator's key, and those that people of the demo made. */
async function endKeys(db: people.Db, nowMs: number): Promise<void> {
	const makers = (await db.select({ id: person.id }).from(person).where(eq(person.demo, true))).map(
		({ id }) => id
	);
	const simulators = and(eq(apiKey.name, DEMO_KEY), isNull(apiKey.makerId));
	await db
		.update(apiKey)
		.set({ revokedAtMs: nowMs })
		.where(
			and(
				isNull(apiKey.revokedAtMs),
				makers.length === 0 ? simulators : or(simulators, inArray(apiKey.makerId, makers))
			)
		);
}
