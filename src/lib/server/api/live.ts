import type { Live } from '$lib/schemas/v1/sites';
import * as queries from '$lib/server/store/queries/live';
import type { SiteRow } from '$lib/server/store/queries/sites';
import type { Instance } from './instance';
import { rfc3339 } from './time';

/** A site is asked for at most once a second, whoever polls. */
const REMEMBER_MS = 1_000;
/** Late: nothing from any node for this many of the shortest period, and this long at the least. */
const LATE_PERIODS = 3;
const LATE_MIN_MS = 90_000;

export interface SiteLive {
	status: Live['status'];
	asOfMs: number;
	lateSinceMs: number | null;
	nodesHeard: number;
	nodesExpected: number;
}

/**
 * live, late or lost. Late since: when the next message was due and none came. Lost: nothing for the
 * site's grace time, after which its bays turn unknown. A site without nodes waits for nothing.
 */
export function judgeLive(
	h: queries.Heard,
	site: { graceS: number; createdAtMs: number },
	nowMs: number
): SiteLive {
	const asOfMs = Math.max(h.newestMs ?? 0, site.createdAtMs);
	const common = { asOfMs, nodesHeard: h.heard, nodesExpected: h.expected };
	if (h.expected === 0) return { ...common, status: 'live', lateSinceMs: null };
	const allowedMs = Math.max(LATE_MIN_MS, LATE_PERIODS * 1000 * (h.shortestPeriodS ?? 60));
	const agoMs = nowMs - asOfMs;
	if (agoMs <= allowedMs) return { ...common, status: 'live', lateSinceMs: null };
	const lost = agoMs > Math.max(allowedMs, site.graceS * 1000);
	return { ...common, status: lost ? 'lost' : 'late', lateSinceMs: asOfMs + allowedMs };
}

interface Remembered {
	atMs: number;
	heard: Promise<queries.Heard>;
}
const remembered = new WeakMap<object, Map<number, Remembered>>();

export async function siteLive(app: Instance, site: SiteRow, nowMs: number): Promise<SiteLive> {
	const sites = remembered.get(app) ?? new Map<number, Remembered>();
	remembered.set(app, sites);
	let known = sites.get(site.id);
	if (known === undefined || nowMs - known.atMs >= REMEMBER_MS || nowMs < known.atMs) {
		known = { atMs: nowMs, heard: queries.heard(app.store.pool, site.id, nowMs) };
		sites.set(site.id, known);
		known.heard.catch(() => sites.delete(site.id));
	}
	return judgeLive(await known.heard, site, nowMs);
}

export const liveView = (l: SiteLive): Live => ({
	status: l.status,
	asOf: rfc3339(l.asOfMs),
	lateSince: l.lateSinceMs === null ? null : rfc3339(l.lateSinceMs),
	nodesHeard: l.nodesHeard,
	nodesExpected: l.nodesExpected
});
