import { and, eq, inArray, isNotNull, isNull, sql } from 'drizzle-orm';
import { bay, bayState, closure, node, nodeFast } from '../schema';
import type { Db } from './people';

export interface RegisterCounts {
	siteId: number;
	bays: number;
	taken: number;
	unknown: number;
	doubtful: number;
	silent: number;
	refreshDue: number;
	closed: number;
	heardAtMs: number | null;
}

const when = (condition: ReturnType<typeof sql>) =>
	sql<number>`cast(coalesce(sum(${condition}), 0) as signed)`;

/** Counts of each site named; closed bays are in none of the states. */
export async function counts(
	db: Db,
	siteIds: readonly number[],
	nowMs: number
): Promise<RegisterCounts[]> {
	if (siteIds.length === 0) return [];
	const isClosed = sql`exists (select 1 from ${closure} where ${closure.bayId} = ${bay.id}
		and ${closure.fromMs} <= ${nowMs} and ${closure.toMs} > ${nowMs} and ${closure.liftedAtMs} is null)`;
	const has = (condition: string) =>
		sql`(${bayState.condition} = ${condition} or find_in_set(${condition}, ${bayState.also}) > 0)`;
	const [rows, heard] = await Promise.all([
		db
			.select({
				siteId: bay.siteId,
				bays: sql<number>`count(*)`,
				taken: when(sql`${bayState.state} = 'occupied' and not ${isClosed}`),
				unknown: when(sql`${bayState.state} = 'unknown' and not ${isClosed}`),
				doubtful: when(sql`${bayState.doubtReason} is not null`),
				silent: when(has('silent')),
				refreshDue: when(has('refresh_due')),
				closed: when(isClosed)
			})
			.from(bay)
			.leftJoin(bayState, eq(bayState.bayId, bay.id))
			.where(and(inArray(bay.siteId, [...siteIds]), eq(bay.removedAtMs, 0)))
			.groupBy(bay.siteId),
		db
			.select({ siteId: node.siteId, atMs: sql<number | null>`max(${nodeFast.heardAtMs})` })
			.from(node)
			.innerJoin(nodeFast, eq(nodeFast.nodeId, node.id))
			.where(
				and(inArray(node.siteId, [...siteIds]), isNotNull(node.bayId), isNull(node.withdrawnAtMs))
			)
			.groupBy(node.siteId)
	]);
	return rows.map((row) => {
		const atMs = heard.find((h) => h.siteId === row.siteId)?.atMs ?? null;
		return { ...row, heardAtMs: atMs === null ? null : Number(atMs) };
	});
}
