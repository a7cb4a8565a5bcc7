import { select, type Sql } from '$lib/server/store/queries/bulk';
import * as refreshes from '$lib/server/store/queries/refreshes';
import type { RefreshOrigin } from '$lib/server/store/queries/refreshes';
import { REFRESH_PARAMS } from './params';

/** What a film refresh is asked for with. */
export interface Ask {
	siteId: number;
	nodeId: number;
	origin: RefreshOrigin;
	bulkId: number | null;
	reason: string;
	by: string;
}

export const NOT_ASKED = {
	no_node: 'there is no such node here',
	not_placed: 'the node lies in no bay',
	withdrawn: 'the node is out of service',
	open_already: 'one is open for this node already',
	visit_first: 'it was not cured twice: somebody has to see the node before another pulse'
} as const;
export type NotAsked = keyof typeof NOT_ASKED;

export type Asked = { ok: true; id: number } | { ok: false; reason: NotAsked };

interface Candidate {
	siteId: number;
	bayId: number | null;
	withdrawnAtMs: number | null;
	condition: string | null;
	also: string | null;
	evidence: string | null;
	driftingSinceMs: number | null;
	refreshSinceMs: number | null;
	openId: number | null;
}

async function candidate(sql: Sql, nodeId: number): Promise<Candidate | null> {
	const rows = await select<Candidate>(
		sql,
		`SELECT n.site_id AS siteId, n.bay_id AS bayId, n.withdrawn_at_ms AS withdrawnAtMs, b.condition, b.also, b.evidence,
			d.drifting_since_ms AS driftingSinceMs, d.refresh_since_ms AS refreshSinceMs, o.id AS openId
		 FROM node n LEFT JOIN bay_state b ON b.bay_id = n.bay_id AND b.node_id = n.id
		 LEFT JOIN drift_node d ON d.node_id = n.id LEFT JOIN refresh o ON o.open_node_id = n.id WHERE n.id = ?`,
		[nodeId]
	);
	return rows[0] ?? null;
}

function jsonOf(text: string | null): unknown {
	try {
		return text === null ? null : JSON.parse(text);
	} catch {
		return null;
	}
}

/** What made it due, as it stands now: kept, whatever the node does later. */
const evidenceOf = (c: Candidate): string =>
	JSON.stringify({
		condition: c.condition,
		also: c.also?.split(',').filter((word) => word !== '') ?? [],
		bay: jsonOf(c.evidence),
		driftingSinceMs: c.driftingSinceMs,
		refreshDueSinceMs: c.refreshSinceMs
	});

/** Asks for a film refresh; it is `asked` and nothing more: a person (or the site's schedule) approves it. */
export async function ask(sql: Sql, wanted: Ask, nowMs: number): Promise<Asked> {
	const c = await candidate(sql, wanted.nodeId);
	if (c === null || c.siteId !== wanted.siteId) return { ok: false, reason: 'no_node' };
	if (c.withdrawnAtMs !== null) return { ok: false, reason: 'withdrawn' };
	if (c.bayId === null) return { ok: false, reason: 'not_placed' };
	if (c.openId !== null) return { ok: false, reason: 'open_already' };
	const failed = await refreshes.notCuredInRow(sql, wanted.nodeId, c.bayId);
	if (failed >= REFRESH_PARAMS.notCuredForVisit) return { ok: false, reason: 'visit_first' };
	const { siteId, nodeId, origin, bulkId, reason, by } = wanted;
	const id = await refreshes.insert(sql, {
		...{ siteId, nodeId, origin, bulkId, reason },
		bayId: c.bayId,
		state: 'asked',
		open: true,
		evidence: evidenceOf(c),
		askedBy: by,
		askedAtMs: nowMs,
		commandId: null
	});
	await refreshes.addTransition(sql, {
		...{ refreshId: id, siteId, nodeId },
		fromState: null,
		toState: 'asked',
		byActor: by,
		why: reason,
		atMs: nowMs
	});
	return { ok: true, id };
}

/** Two who ask at once: the second finds the first one's. */
export const isDuplicate = (error: unknown): boolean =>
	(error as { errno?: number } | null)?.errno === 1062;
