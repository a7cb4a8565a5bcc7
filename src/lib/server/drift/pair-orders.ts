import { inService, type NodeEntry } from '$lib/server/ingest/node-entry';
import type { Pipeline } from '$lib/server/ingest/pipeline';
import * as commands from '$lib/server/store/queries/commands';
import * as state from '$lib/server/store/queries/drift-state';
import { inQuietHours } from './quiet-hours';

/** An order stands this long: a bay that is empty now may be taken by then. */
const EXPIRES_MS = 600_000;
/** Method 7: none other within an hour. */
const APART_MS = 3_600_000;
/** A pair that told nothing tells no more within hours (drift/params.ts, diagnoseHours). */
const AGAIN_MS = 6 * 3_600_000;
/** Readings older than this do not say that the bay is empty now. */
const HEARD_MS = 600_000;
/** Orders of one look at one site: the radio has other things to do too. */
const MOST_ORDERS = 20;

/** Conditions under which a pair by rule is wrong or useless; 'drifting' is what `diagnose` is for. */
const NO_PAIR = new Set(['learning', 'silent', 'inverted', 'clipped', 'withdrawn', 'unplaced']);

/** Why a rule may not fire a pulse at this node now, or null when it may (method 5 and 7). */
export function refusesPair(pipeline: Pipeline, entry: NodeEntry, nowMs: number): string | null {
	const { live, config } = entry;
	const view = pipeline.viewOf(entry.id);
	if (!inService(entry) || view === null || live.heardBoot === null) return 'not in service';
	const names = [...view.conditions, ...(live.silence.silent ? ['silent'] : [])];
	if (names.some((name) => NO_PAIR.has(name))) return 'in another condition';
	if (view.state !== 'vacant' || view.doubt !== null) return 'the bay is not surely vacant';
	if (view.disturbanceMg === null || view.disturbanceMg >= view.offMg) return 'the field moves';
	if (live.last === null || nowMs - live.last.atMs > HEARD_MS) return 'not heard just now';
	// A node that does not tell its battery is not known to stand a pulse.
	if (live.batteryMv === null || live.batteryMv < config.profile.batteryFloorMv)
		return 'the cell is too low, or not known';
	return null;
}

/**
 * Orders the pairs that a site's rule would have, where method 5 and 7 allow it: the bay vacant and still, quiet
 * hours, the battery above the floor, no other pulse within an hour. Returns how many were ordered.
 */
export async function orderPairs(
	pipeline: Pipeline,
	site: state.DriftSite,
	nowMs: number
): Promise<number> {
	if (site.pairRule === 'never' || !inQuietHours(nowMs, site)) return 0;
	const { room } = pipeline;
	const wanted = await state.pairsWanted(room.pool, site.siteId);
	const able = wanted.flatMap(({ nodeId, placedAtMs, wanted: cause }) => {
		const entry = room.registry.byId(nodeId);
		if (entry === undefined || entry.config.placedAtMs !== placedAtMs) return [];
		return refusesPair(pipeline, entry, nowMs) === null ? [{ entry, cause }] : [];
	});
	const last = await state.lastPulses(
		room.pool,
		able.map(({ entry }) => entry.id),
		nowMs
	);
	let ordered = 0;
	for (const { entry, cause } of able) {
		const before = last.get(entry.id);
		if (ordered >= MOST_ORDERS) break;
		if (before === undefined || tooSoon(before, nowMs)) continue;
		await commands.order(room.pool, {
			...{ nodeId: entry.id, verb: 'pair', report: null, boot: entry.live.heardBoot ?? 0 },
			...{ cause, byActor: 'rule', createdAtMs: nowMs, expiresAtMs: nowMs + EXPIRES_MS }
		});
		ordered += 1;
	}
	return ordered;
}

export interface LastPulse {
	pulseAtMs: number | null;
	pairAtMs: number | null;
	orderedAtMs: number | null;
	open: boolean;
}

/** An open order of anybody, a pulse within the hour, a pair or the order of one within 6 h. */
export const tooSoon = (last: LastPulse, nowMs: number): boolean =>
	last.open ||
	nowMs - (last.pulseAtMs ?? -Infinity) < APART_MS ||
	nowMs - (last.pairAtMs ?? -Infinity) < AGAIN_MS ||
	nowMs - (last.orderedAtMs ?? -Infinity) < AGAIN_MS;
