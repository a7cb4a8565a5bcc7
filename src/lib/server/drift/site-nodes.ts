import { DRIFT_PARAMS, driftSettings, type DriftSettings } from '$lib/drift/params';
import type { SensorProfile } from '$lib/magnetics/sensor-profile';
import { inService } from '$lib/server/ingest/node-entry';
import type { Registry } from '$lib/server/ingest/registry';
import type { Sql } from '$lib/server/store/queries/bulk';
import * as inputs from '$lib/server/store/queries/drift-inputs';

/** A node that lies in a bay of the site. */
export interface SiteNode {
	id: number;
	bayId: number;
	placedAtMs: number;
	profile: SensorProfile;
	/** Bays within 4 m: what stands there moves this node's field too. */
	nearBayIds: readonly number[];
}

/** Nodes in service by site, ids rising. */
export function nodesBySite(
	registry: Pick<Registry, 'all' | 'byId' | 'neighboursOf'>
): Map<number, SiteNode[]> {
	const sites = new Map<number, SiteNode[]>();
	for (const entry of registry.all()) {
		const { bayId, placedAtMs, siteId, profile } = entry.config;
		if (!inService(entry) || bayId === null || placedAtMs === null) continue;
		const nodes = sites.get(siteId) ?? [];
		const near = registry.neighboursOf(entry.id);
		const nearBayIds = near.flatMap((id) => registry.byId(id)?.config.bayId ?? []);
		nodes.push({ id: entry.id, bayId, placedAtMs, profile, nearBayIds });
		sites.set(siteId, nodes);
	}
	for (const nodes of sites.values()) nodes.sort((a, b) => a.id - b.id);
	return sites;
}

export interface SiteSettings {
	site: DriftSettings;
	of(nodeId: number): DriftSettings;
}

const NAMES = Object.keys(DRIFT_PARAMS);

/** Settings as they held at a time: a rebuild finds the same. */
export async function settingsAt(sql: Sql, siteId: number, atMs: number): Promise<SiteSettings> {
	const site: Record<string, number> = {};
	const nodes = new Map<number, Record<string, number>>();
	for (const { nodeId, name, value } of await inputs.overrides(sql, siteId, NAMES, atMs)) {
		const number = Number(value);
		if (!Number.isFinite(number)) continue;
		if (nodeId === null) site[name] = number;
		else nodes.set(nodeId, { ...nodes.get(nodeId), [name]: number });
	}
	const whole = driftSettings(site);
	const own = new Map(
		[...nodes].map(([id, values]) => [id, driftSettings({ ...site, ...values })] as const)
	);
	return { site: whole, of: (nodeId) => own.get(nodeId) ?? whole };
}
