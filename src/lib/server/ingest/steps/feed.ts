import * as changes from '$lib/server/store/queries/changes';
import * as ingest from '$lib/server/store/queries/ingest';
import type { NodeEntry } from '../node-entry';
import { firstDiffering } from '../order';
import type { Transaction } from '../transaction';

/** What one batch tells of one site. */
export interface SiteNews {
	events: { event: changes.NewEvent; told: (eventId: number) => void }[];
	shown: { entry: NodeEntry; now: ingest.ShownRow; change: 'bay' | 'condition' }[];
	/** What bays show already, for those of which nothing changes. */
	states?: ReadonlyMap<number, ingest.ShownRow['state']>;
	/** Changes without rows of their own (closures). */
	other: changes.NewChange[];
}

/** Events of one bay stand in the order in which they happened. */
const byTime = (a: SiteNews['events'][number], b: SiteNews['events'][number]): number =>
	firstDiffering(
		Number(b.event.type === 'voided') - Number(a.event.type === 'voided'),
		a.event.atMs - b.event.atMs,
		a.event.bayId - b.event.bayId
	);

/** Allots ids of each site's log and writes events, log and bay states under them; sites by rising id. */
export async function allotAndWrite(
	transaction: Transaction,
	news: ReadonlyMap<number, SiteNews>,
	nowMs: number
): Promise<void> {
	for (const [siteId, site] of [...news].sort(([a], [b]) => a - b)) {
		const n = site.events.length + site.shown.length + site.other.length;
		if (n > 0) await writeSite(transaction, siteId, site, n, nowMs);
	}
}

async function writeSite(
	transaction: Transaction,
	siteId: number,
	site: SiteNews,
	n: number,
	nowMs: number
): Promise<void> {
	const firstId = await changes.allot(transaction, siteId, n);
	const sql = transaction.later;
	const events = [...site.events].sort(byTime);
	events.forEach(({ told }, i) => told(firstId + i));
	stateOfVoids(site, events);
	await changes.writeEvents(
		sql,
		siteId,
		firstId,
		events.map(({ event }) => event),
		nowMs
	);
	const log: changes.NewChange[] = [
		...events.map(({ event }) => ({
			kind: 'event' as const,
			bayId: event.bayId,
			nodeId: event.nodeId
		})),
		...site.shown.map(({ now, change }) => ({
			kind: change,
			bayId: now.bayId,
			nodeId: now.nodeId
		})),
		...site.other
	];
	await changes.write(sql, siteId, firstId, log, nowMs);
	const shown = site.shown.map(({ now }, i) => ({ ...now, changeId: firstId + events.length + i }));
	await ingest.writeShown(sql, shown);
	for (const { entry, now } of site.shown) entry.live.shown = now;
}

/** A `voided` event says what the bay's state is without the voided one. */
function stateOfVoids(site: SiteNews, events: SiteNews['events']): void {
	const now = new Map(site.shown.map(({ now: row }) => [row.bayId, row.state]));
	for (const { event } of events)
		if (event.type === 'voided')
			event.state = now.get(event.bayId) ?? site.states?.get(event.bayId) ?? event.state;
}
