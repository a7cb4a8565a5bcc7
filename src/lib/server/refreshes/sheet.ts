import { rfc3339, rfc3339OrNull } from '$lib/server/api/time';
import type { Sql } from '$lib/server/store/queries/bulk';
import { settings } from '$lib/server/store/queries/refresh-settings';
import * as refreshes from '$lib/server/store/queries/refreshes';
import * as views from '$lib/server/store/queries/refresh-views';
import type { NamedRefresh } from '$lib/server/store/queries/refresh-views';
import type { LeftOut } from './bulk';
import { dueNodes, reasonsOf } from './schedule';
import { DUE_WORDS, settingsOf, type RefreshSettings } from './settings';
import { summaryOf, usuallyEmpty, viewOf } from './views';

/** What ended longer ago stands in the dossiers. */
const SHOWN_MS = 30 * 86_400_000;

export async function siteSettings(sql: Sql, siteId: number): Promise<RefreshSettings> {
	const [site] = await settings(sql, siteId);
	if (site === undefined) throw new Error(`There is no site ${siteId}.`);
	return settingsOf(site);
}

function countsOf(text: string | null): Record<string, number> {
	const pairs = (text ?? '').split(',').filter((part) => part !== '');
	return Object.fromEntries(
		pairs.map((part) => {
			const [state = '', n = '0'] = part.split(':');
			return [state, Number(n)];
		})
	);
}

const nameOf = (names: ReadonlyMap<string, string>, actor: string): string =>
	names.get(actor) ?? { rule: 'a rule', node: 'the node' }[actor] ?? 'somebody';

/** Everything on the sheet of one site. */
export async function sheetOf(
	sql: Sql,
	site: { id: number },
	reader: { personal: boolean; actor: string },
	nowMs: number
) {
	const sinceMs = nowMs - SHOWN_MS;
	const rows = await views.ofSite(sql, site.id, reader.personal, sinceMs);
	const bulks = await views.bulks(sql, site.id, sinceMs);
	const due = await dueNodes(sql, site.id, reader.personal);
	const actors = [...rows.map((r) => r.askedBy), ...bulks.map((b) => b.askedBy)];
	const names = await views.actorNames(sql, actors);
	return {
		items: rows.map((r) => ({
			...summaryOf(r),
			zone: r.zone,
			bulk: r.bulkId,
			askedBy: nameOf(names, r.askedBy),
			mine: r.askedBy === reader.actor,
			baySince: rfc3339OrNull(r.baySinceMs),
			bayState: r.bayState
		})),
		due: due.map((node) => ({
			bay: node.bay,
			zone: node.zone,
			reasons: reasonsOf(node).map((reason) => DUE_WORDS[reason])
		})),
		bulks: bulks.map((b) => ({
			id: b.id,
			what: b.what,
			reason: b.reason,
			state: b.state,
			askedBy: nameOf(names, b.askedBy),
			askedAt: rfc3339(b.askedAtMs),
			endedAt: rfc3339OrNull(b.endedAtMs),
			counts: countsOf(b.counts),
			leftOut: JSON.parse(b.leftOut) as LeftOut[]
		})),
		settings: await siteSettings(sql, site.id)
	};
}
export type RefreshSheet = Awaited<ReturnType<typeof sheetOf>>;

/** One film refresh as people read it: with names, and when its bay is usually empty. */
export async function detailOf(sql: Sql, r: NamedRefresh, nowMs: number) {
	const steps = await refreshes.transitions(sql, r.id);
	const names = await views.actorNames(
		sql,
		steps.map(({ byActor }) => byActor)
	);
	const view = await viewOf(sql, r);
	return {
		...view,
		transitions: view.transitions.map((step, i) => ({
			...step,
			who: nameOf(names, steps[i]?.byActor ?? 'rule')
		})),
		usuallyEmpty: r.endedAtMs === null ? await usuallyEmpty(sql, r, nowMs) : null
	};
}
export type RefreshDetail = Awaited<ReturnType<typeof detailOf>>;
