import { run, select, type Sql } from '$lib/server/store/queries/bulk';
import { readProfile } from '$lib/server/store/queries/profiles';
import * as refreshes from '$lib/server/store/queries/refreshes';
import { bulkNodes, type BulkNode } from '$lib/server/store/queries/refresh-views';
import { apply } from './apply';
import { ask, NOT_ASKED } from './ask';
import { GUARD_WORDS, type Guard } from './guards';
import { REFRESH_PARAMS } from './params';
import { addPrices, priceOf, type Price } from './price';

export type Which = { zone: string } | { bays: readonly string[] };

export interface LeftOut {
	bay: string;
	why: string;
}

export interface Preview {
	bays: string[];
	/** Of those that qualify, how many are empty now. */
	emptyNow: number;
	leftOut: LeftOut[];
	price: Price;
	/** Life of the cell that one film refresh costs, days: the dearest node. */
	mostDays: number;
}

/** What keeps a node out that waiting does not cure. */
async function outOf(sql: Sql, node: BulkNode): Promise<string | null> {
	const floorMv = readProfile(node.profileCode, node.profileBody)?.batteryFloorMv ?? Infinity;
	const guard: Guard | null =
		node.heardBoot === null
			? 'never_heard'
			: node.condition === 'silent'
				? 'silent'
				: node.batteryMv === null
					? 'battery_not_known'
					: node.batteryMv < floorMv
						? 'battery_low'
						: null;
	if (guard !== null) return GUARD_WORDS[guard];
	if (node.openId !== null) return NOT_ASKED.open_already;
	const failed = await refreshes.notCuredInRow(sql, node.nodeId, node.bayId);
	return failed >= REFRESH_PARAMS.notCuredForVisit ? NOT_ASKED.visit_first : null;
}

async function sift(sql: Sql, siteId: number, which: Which, personal: boolean) {
	const nodes = await bulkNodes(sql, siteId, which, personal);
	const fit: BulkNode[] = [];
	const leftOut: LeftOut[] = [];
	for (const node of nodes) {
		const why = await outOf(sql, node);
		if (why === null) fit.push(node);
		else leftOut.push({ bay: node.bay, why });
	}
	const asked = 'bays' in which ? which.bays : [];
	const found = new Set(nodes.map(({ bay }) => bay));
	for (const bay of asked) if (!found.has(bay)) leftOut.push({ bay, why: 'no node lies there' });
	return { fit, leftOut };
}

/** Who would be taken, who not and why, and what it costs (method 7: before a bulk order). */
export async function preview(
	sql: Sql,
	siteId: number,
	which: Which,
	personal: boolean
): Promise<Preview> {
	const { fit, leftOut } = await sift(sql, siteId, which, personal);
	const prices = fit.flatMap((node) => {
		const profile = readProfile(node.profileCode, node.profileBody);
		return profile === null ? [] : [priceOf(profile, node.usualPeriodS, REFRESH_PARAMS)];
	});
	return {
		bays: fit.map(({ bay }) => bay),
		emptyNow: fit.filter(({ state }) => state === 'vacant').length,
		leftOut,
		price: addPrices(prices),
		mostDays: Math.max(0, ...prices.map(({ batteryDays }) => batteryDays))
	};
}

export interface BulkOrder {
	siteId: number;
	which: Which;
	personal: boolean;
	reason: string;
	by: string;
}

/** Orders for all that qualify, in one transaction; the worker carries them out. Null = none qualifies. */
export async function orderBulk(
	sql: Sql,
	o: BulkOrder,
	nowMs: number
): Promise<{ id: number; asked: number } | null> {
	const { fit, leftOut } = await sift(sql, o.siteId, o.which, o.personal);
	if (fit.length === 0) return null;
	const what =
		'zone' in o.which
			? `zone ${o.which.zone}`
			: `${fit.length} ${fit.length === 1 ? 'bay' : 'bays'} picked`;
	const { insertId: id } = await run(
		sql,
		'INSERT INTO refresh_bulk (site_id, what, reason, left_out, asked_by, asked_at_ms) VALUES (?)',
		[[o.siteId, what, o.reason, JSON.stringify(leftOut.slice(0, 500)), o.by, nowMs]]
	);
	let asked = 0;
	for (const { nodeId } of fit) {
		const { siteId, reason, by } = o;
		const done = await ask(
			sql,
			{ siteId, nodeId, origin: 'person', bulkId: id, reason, by },
			nowMs
		);
		if (done.ok) asked += 1;
	}
	return { id, asked };
}

export type BulkDeed = 'approve' | 'pause' | 'go_on' | 'call_off';

const openOf = async (sql: Sql, bulkId: number) =>
	await select<{ id: number; state: string }>(
		sql,
		'SELECT id, state FROM refresh WHERE bulk_id = ? AND ended_at_ms IS NULL ORDER BY id',
		[bulkId]
	);

export interface BulkAct {
	deed: BulkDeed;
	by: string;
	why: string;
	anyHour: boolean;
	ownAllowed: boolean;
}

/** One deed on a whole bulk order. Returns how many film refreshes it moved, and how many it could not. */
export async function actOnBulk(
	sql: Sql,
	bulkId: number,
	act: BulkAct,
	nowMs: number
): Promise<{ moved: number; own: number }> {
	const { deed, by, why, anyHour, ownAllowed } = act;
	if (deed === 'pause' || deed === 'go_on') {
		const [from, to] = deed === 'pause' ? ['running', 'paused'] : ['paused', 'running'];
		const done = await run(sql, 'UPDATE refresh_bulk SET state = ? WHERE id = ? AND state = ?', [
			to,
			bulkId,
			from
		]);
		return { moved: done.affectedRows, own: 0 };
	}
	if (deed === 'call_off')
		await run(
			sql,
			"UPDATE refresh_bulk SET state = 'called_off' WHERE id = ? AND ended_at_ms IS NULL",
			[bulkId]
		);
	const tally = { moved: 0, own: 0 };
	for (const { id, state } of await openOf(sql, bulkId)) {
		// What a node has obeyed is measured to its end: its proof costs nothing more.
		if (deed === 'call_off' && (state === 'obeyed' || state === 'measured')) continue;
		const done =
			deed === 'approve'
				? await apply(sql, id, { kind: 'approve', by, anyHour, ownAllowed, atMs: nowMs })
				: await apply(sql, id, { kind: 'call_off', by, why, atMs: nowMs });
		if (done.ok) tally.moved += 1;
		else if (done.reason === 'own_request') tally.own += 1;
	}
	return tally;
}
