import type { ClosureIn } from '$lib/schemas/v1/feed';
import { request } from '$lib/server/store/queries/act-requests';
import * as bays from '$lib/server/store/queries/bays';
import * as changes from '$lib/server/store/queries/changes';
import * as closures from '$lib/server/store/queries/closures';
import * as nodes from '$lib/server/store/queries/nodes';
import type { Tx } from '$lib/server/store/transaction';
import { problem, type Problem } from './problem';
import { rfc3339, rfc3339OrNull } from './time';

const LONGEST_MS = 366 * 86_400_000;

export const closureView = (row: closures.ClosureRow) => ({
	id: row.id,
	bay: row.bay,
	from: rfc3339(row.fromMs),
	to: rfc3339(row.toMs),
	reason: row.reason,
	liftedAt: rfc3339OrNull(row.liftedAtMs)
});

interface By {
	siteId: number;
	actor: string;
	personal: boolean;
	nowMs: number;
}

async function baysOf(tx: Tx, by: By, wanted: ClosureIn): Promise<bays.BayRow[] | Problem> {
	if (wanted.zone !== undefined) {
		const rows = await bays.ofZone(tx.db, by.siteId, wanted.zone);
		const seen = rows.filter((row) => by.personal || !row.personal);
		return seen.length > 0 ? seen : problem(422, `There is no bay in a zone '${wanted.zone}'.`);
	}
	const codes = [...new Set(wanted.bays ?? [])];
	const rows = await bays.byCodes(tx.db, by.siteId, codes);
	const seen = rows.filter((row) => by.personal || !row.personal);
	const missing = codes.find((code) => !seen.some((row) => row.code === code));
	return missing === undefined ? seen : problem(422, `There is no bay '${missing}'.`);
}

export interface ClosuresMade {
	items: ReturnType<typeof closureView>[];
	/** The act to wait for: the last one whose time has come; null when all lie ahead. */
	actId: number | null;
}

/** One closure and one act a bay, all or nothing. */
export async function close(tx: Tx, by: By, wanted: ClosureIn): Promise<ClosuresMade | Problem> {
	if (wanted.to <= by.nowMs) return problem(422, 'A closure that is over closes nothing.');
	if (wanted.to - wanted.from > LONGEST_MS) return problem(422, 'A closure lasts a year at most.');
	const rows = await baysOf(tx, by, wanted);
	if (!Array.isArray(rows)) return rows;
	const made: closures.ClosureRow[] = [];
	let actId: number | null = null;
	const common = { fromMs: wanted.from, toMs: wanted.to, reason: wanted.reason };
	for (const row of rows) {
		if (await closures.overlapping(tx.db, row.id, wanted.from, wanted.to)) {
			return problem(409, `Bay '${row.code}' is closed in that time already.`);
		}
		const id = await closures.create(tx.db, { siteId: by.siteId, bayId: row.id, ...common });
		actId = await closeAct(tx, by, row, id, wanted);
		await closures.setAct(tx.db, id, actId);
		made.push({ id, bayId: row.id, bay: row.code, ...common, liftedAtMs: null });
	}
	await logClosures(tx, by, made);
	return {
		items: made.map(closureView),
		actId: wanted.from <= by.nowMs ? actId : null
	};
}

async function closeAct(tx: Tx, by: By, bay: bays.BayRow, closureId: number, wanted: ClosureIn) {
	const node = await nodes.ofBay(tx.db, bay.id);
	return await request(
		tx.db,
		{
			siteId: by.siteId,
			bayId: bay.id,
			nodeId: node?.id ?? null,
			kind: 'close',
			args: { closureId, toMs: wanted.to, reason: wanted.reason },
			atMs: wanted.from,
			byActor: by.actor,
			why: wanted.reason
		},
		by.nowMs
	);
}

async function logClosures(tx: Tx, by: By, made: readonly closures.ClosureRow[]): Promise<void> {
	const rows = made.map(({ bayId }) => ({ kind: 'closure' as const, bayId, nodeId: null }));
	await changes.append(tx.sql, by.siteId, rows, by.nowMs);
}

/** Ends a closure before its time. Returns the act to wait for. */
export async function lift(
	tx: Tx,
	by: By,
	closureId: number
): Promise<{ actId: number } | Problem> {
	const row = await closures.byId(tx.db, by.siteId, closureId);
	const bay = row === null ? null : await bays.byId(tx.db, row.bayId);
	if (row === null || bay === null || (bay.personal && !by.personal)) {
		return problem(404, 'There is no such closure.');
	}
	if (row.liftedAtMs !== null || row.toMs <= by.nowMs) {
		return problem(409, 'This closure is over already.');
	}
	await closures.lift(tx.db, row.id, by.nowMs);
	const node = await nodes.ofBay(tx.db, row.bayId);
	const actId = await request(
		tx.db,
		{
			siteId: by.siteId,
			bayId: row.bayId,
			nodeId: node?.id ?? null,
			kind: 'lift',
			args: { closureId: row.id },
			atMs: by.nowMs,
			byActor: by.actor
		},
		by.nowMs
	);
	await logClosures(tx, by, [{ ...row, bay: bay.code }]);
	return { actId };
}
