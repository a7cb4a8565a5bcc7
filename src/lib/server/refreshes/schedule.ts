import type { Store } from '$lib/server/store/connect';
import { select, type Sql } from '$lib/server/store/queries/bulk';
import { transaction } from '$lib/server/store/transaction';
import { apply } from './apply';
import { ask } from './ask';
import { isWithin, localTime } from './local-time';
import { DUE_WORDS, dueReasons, type RefreshSettings } from './settings';

const MINUTE_MS = 60_000;
const DAY_MIN = 1440;

export interface DueNode {
	nodeId: number;
	bay: string;
	zone: string;
	condition: string;
	also: string;
	refreshSinceMs: number | null;
}

/** Nodes of a site for which a film refresh may be due and none is open. */
export async function dueNodes(sql: Sql, siteId: number, personal: boolean): Promise<DueNode[]> {
	return await select<DueNode>(
		sql,
		`SELECT n.id AS nodeId, y.code AS bay, z.code AS zone, b.condition, b.also, d.refresh_since_ms AS refreshSinceMs
		 FROM bay_state b JOIN node n ON n.id = b.node_id AND n.withdrawn_at_ms IS NULL AND n.bay_id = b.bay_id
		 JOIN bay y ON y.id = b.bay_id AND y.removed_at_ms = 0 JOIN zone z ON z.id = y.zone_id
		 LEFT JOIN drift_node d ON d.node_id = n.id LEFT JOIN refresh o ON o.open_node_id = n.id
		 WHERE b.site_id = ? AND (? OR y.personal = 0) AND o.id IS NULL AND (b.condition IN ('inverted', 'clipped', 'refresh_due')
			OR FIND_IN_SET('inverted', b.also) OR FIND_IN_SET('clipped', b.also) OR FIND_IN_SET('refresh_due', b.also)
			OR d.refresh_since_ms IS NOT NULL)
		 ORDER BY y.code LIMIT 2000`,
		[siteId, personal]
	);
}

export const reasonsOf = (node: DueNode) =>
	dueReasons({
		conditions: [node.condition, ...node.also.split(',')],
		unexplainedSinceMs: node.refreshSinceMs
	});

/** When the quiet hours of now began. */
function nightBeganMs(s: RefreshSettings, nowMs: number): number {
	const { minute } = localTime(nowMs, s.timezone);
	const intoMin = (minute - s.quietFromMin + DAY_MIN) % DAY_MIN;
	return nowMs - (intoMin + 1) * MINUTE_MS;
}

/** Sites that let film refreshes run by rule: in quiet hours, for the chosen reasons, so many a night. */
export async function runSchedule(
	store: Store,
	settings: ReadonlyMap<number, RefreshSettings>,
	nowMs: number
): Promise<number> {
	let asked = 0;
	for (const [siteId, s] of settings) {
		const { minute } = localTime(nowMs, s.timezone);
		if (!s.scheduleOn || !isWithin(minute, s.quietFromMin, s.quietToMin)) continue;
		const [done] = await select<{ n: number }>(
			store.pool,
			"SELECT COUNT(*) AS n FROM refresh WHERE site_id = ? AND origin = 'schedule' AND asked_at_ms >= ?",
			[siteId, nightBeganMs(s, nowMs)]
		);
		let left = s.mostANight - Number(done?.n ?? 0);
		for (const node of left > 0 ? await dueNodes(store.pool, siteId, true) : []) {
			const reasons = reasonsOf(node).filter((reason) => s.scheduleReasons.includes(reason));
			if (left <= 0 || reasons.length === 0) continue;
			const reason = `by schedule: ${reasons.map((name) => DUE_WORDS[name]).join('; ')}`;
			if (!(await order(store, siteId, node.nodeId, reason, nowMs))) continue;
			left -= 1;
			asked += 1;
		}
	}
	return asked;
}

async function order(
	store: Store,
	siteId: number,
	nodeId: number,
	reason: string,
	nowMs: number
): Promise<boolean> {
	return await transaction(
		store,
		async ({ sql }) => {
			const wanted = { siteId, nodeId, origin: 'schedule' as const, bulkId: null, reason };
			const asked = await ask(sql, { ...wanted, by: 'rule' }, nowMs);
			if (!asked.ok) return false;
			// The person who turned the schedule on has approved what it orders.
			await apply(sql, asked.id, {
				...{ kind: 'approve', by: 'rule', anyHour: false, ownAllowed: true },
				atMs: nowMs
			} as const);
			return true;
		},
		(done) => done
	);
}
