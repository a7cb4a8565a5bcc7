import { judgeLive } from '$lib/server/api/live';
import type { Store } from '$lib/server/store/connect';
import type { Sql } from '$lib/server/store/queries/bulk';
import * as changes from '$lib/server/store/queries/changes';
import * as live from '$lib/server/store/queries/live';
import * as queries from '$lib/server/store/queries/notice-look';
import * as notices from '$lib/server/store/queries/notices';
import * as visits from '$lib/server/store/queries/visits';
import { transaction } from '$lib/server/store/transaction';
import { askByRule } from '$lib/server/visits/ask-by-rule';
import { VISIT_PARAMS } from '$lib/server/visits/params';
import { apply, type Applied } from './apply';
import type { DriftFacts } from './drift-facts';
import { healedLately } from './healed';
import { kindsOf } from './kinds';
import type { Recipient } from './people';
import { reconcile } from './reconcile';
import { REFERENCE_DOUBT, subjectsOf } from './subjects';

/** What only time brings on (ripening silence, ends of closures) is looked for at least this often. */
const LOOK_EVERY_MS = 30_000;
/** A site that is late for less than this is not told of. */
const LATE_FOR_MS = 120_000;
const DAY_MS = 86_400_000;
/** Refused frames of a node within a day from which somebody should look (20 an hour are kept). */
const REFUSED_LEAST = 10;
/** Proofs older than this say nothing of a notice that is open. */
const PROOFS_MS = 120 * DAY_MS;
const CHANGES_AT_ONCE = 5_000;

export interface Look {
	store: Store;
	people: readonly Recipient[];
	nowMs: number;
	/** Since when this server listens: what was sent before cannot have been heard. */
	listensSinceMs: number;
	/** Kept by the worker: figures of drift are worked out once an hour. */
	drift: DriftFacts;
}

const NOTHING: Applied = { opened: 0, closed: 0, wishes: 0 };

/** Kinds of change that can open or close a notice. */
const MATTERS = new Set(['bay', 'condition', 'closure', 'removed', 'site']);

/** Whether a look at a site would find anything; without a lock. */
export const worthALook = (site: queries.SiteToLook, nowMs: number): boolean =>
	site.lastChange !== (site.changeId ?? -1) || nowMs - (site.lookedAtMs ?? 0) >= LOOK_EVERY_MS;

/**
 * Takes what a site's change log brought since the last look into notices, once: the cursor moves in the
 * same transaction, so that a restart at any point neither loses nor doubles.
 */
export async function lookAt(look: Look, site: queries.SiteToLook): Promise<Applied> {
	return await transaction(look.store, async ({ sql }) => {
		const cursor = await queries.lockCursor(sql, site.id);
		const { changeId, matters } = await readLog(sql, site.id, cursor.changeId);
		const stale = look.nowMs - cursor.lookedAtMs >= LOOK_EVERY_MS;
		const ended = !matters && !stale && (await queries.endedSince(sql, site.id, cursor.lookedAtMs));
		const lookedAtMs = matters || stale || ended ? look.nowMs : cursor.lookedAtMs;
		const applied = matters || stale || ended ? await judge(sql, look, site) : NOTHING;
		await queries.setCursor(sql, site.id, { changeId, lookedAtMs });
		return applied;
	});
}

async function readLog(sql: Sql, siteId: number, from: number) {
	let [at, matters] = [from, false];
	for (;;) {
		const page = await changes.after(sql, siteId, at, CHANGES_AT_ONCE);
		// What is no longer kept is made up for by looking at everything as it stands.
		if (!page.ok) return { changeId: await changes.cursor(sql, siteId), matters: true };
		matters ||= page.items.some(({ kind }) => MATTERS.has(kind));
		at = page.last;
		if (page.items.length < CHANGES_AT_ONCE) return { changeId: at, matters };
	}
}

async function judge(sql: Sql, look: Look, site: queries.SiteToLook): Promise<Applied> {
	const { nowMs } = look;
	const rows = await notices.open(sql, site.id);
	const proofs = await queries.proofs(sql, site.id, nowMs - PROOFS_MS);
	const notCured = proofs.filter(({ state, visited }) => state === 'not_cured' && visited === 0);
	const refused = await queries.refused(sql, site.id, nowMs - DAY_MS, REFUSED_LEAST);
	const others = [...notCured.map(({ nodeId }) => nodeId), ...refused.keys()];
	const nodes = await queries.troubled(sql, site.id, { nowMs, doubt: REFERENCE_DOUBT, others });
	const heard = await live.heard(sql, site.id, nowMs);
	const { subjects, folded } = subjectsOf({
		...{ siteId: site.id, nowMs, nodes, heardOf: heard },
		totals: await queries.totals(sql, site.id),
		extra: {
			refused,
			notCured: new Set(notCured.map(({ nodeId }) => nodeId)),
			drift: await look.drift.of(sql, site.id, drifting(nodes), nowMs)
		},
		lateSinceMs: lateSinceMs(heard, site, look),
		stormsOpen: new Set(rows.flatMap(({ about }) => stormKey(about, site.id))),
		open: new Set(rows.map(({ about }) => about))
	});
	const seenTo = await visits.seenToSince(sql, site.id, nowMs - VISIT_PARAMS.restMs);
	const nodeIds = rows.flatMap(({ nodeId }) => nodeId ?? []);
	const gone = await queries.gone(sql, nodeIds);
	const steps = reconcile(
		rows.map((row) => ({ ...row, kinds: kindsOf(row.kinds), awaitsProof: row.awaitsProof === 1 })),
		subjects.filter((subject) => !rests(subject, rows, seenTo)),
		{
			provedAtMs: new Map(
				proofs
					.filter(({ state }) => state === 'proved')
					.map(({ nodeId, endedAtMs }) => [`node:${nodeId}`, endedAtMs])
			),
			gone: new Set([...gone].map((id) => `node:${id}`)),
			healed: await healedLately(sql, site.id, nowMs),
			folded
		}
	);
	const ground = { siteId: site.id, zone: site.timezone, people: look.people, nowMs };
	const open = new Map(
		rows.map((row) => [
			row.id,
			{ ...row, kinds: kindsOf(row.kinds), awaitsProof: row.awaitsProof === 1 }
		])
	);
	const applied = await apply(sql, ground, steps, open);
	await askByRule(sql, site.id, nowMs);
	return applied;
}

/** Where somebody has just been, what still shows is given time before it is told anew. */
const rests = (
	{ nodeId, about }: { nodeId: number | null; about: string },
	open: readonly { about: string }[],
	seenTo: ReadonlySet<number>
): boolean =>
	nodeId !== null && seenTo.has(nodeId) && !open.some((notice) => notice.about === about);

const DRIFTING = /drifting|refresh_due/;

const drifting = (nodes: readonly queries.TroubledRow[]): number[] =>
	nodes
		.filter(({ condition, also }) => DRIFTING.test(`${condition},${also}`))
		.map(({ nodeId }) => nodeId);

function lateSinceMs(
	heard: live.Heard,
	site: queries.SiteToLook,
	{ nowMs, listensSinceMs }: Look
): number | null {
	const { lateSinceMs: since } = judgeLive(heard, site, nowMs);
	if (since === null) return null;
	return nowMs - Math.max(since, listensSinceMs) >= LATE_FOR_MS ? since : null;
}

function stormKey(about: string, siteId: number): string[] {
	const head = `storm:${siteId}:`;
	return about.startsWith(head) ? [about.slice(head.length)] : [];
}
