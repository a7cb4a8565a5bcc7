import { eq } from 'drizzle-orm';
import type { ActArgs, ActKind } from '$lib/schemas/act';
import { act } from '../schema';
import type { Db } from './people';

export interface ActWanted<K extends ActKind> {
	siteId: number;
	nodeId: number | null;
	bayId: number | null;
	kind: K;
	args: ActArgs<K>;
	/** Event time: when it was seen, or from when it holds. */
	atMs: number;
	byActor: string;
	why?: string | null;
}

/** Writes what somebody did; the pipeline takes it into its next batch. Returns the act's id. */
export async function request<K extends ActKind>(
	db: Db,
	wanted: ActWanted<K>,
	nowMs: number
): Promise<number> {
	const { args, why, ...rest } = wanted;
	const [{ insertId }] = await db
		.insert(act)
		.values({ ...rest, args: JSON.stringify(args), why: why ?? null, recordedAtMs: nowMs });
	return insertId;
}

/** What the pipeline said of it: 'done' or why not; null = not taken yet. */
export async function outcome(db: Db, id: number): Promise<string | null> {
	const rows = await db
		.select({ outcome: act.outcome, takenAtMs: act.takenAtMs })
		.from(act)
		.where(eq(act.id, id));
	const row = rows[0];
	return row?.takenAtMs == null ? null : (row.outcome ?? 'done');
}
