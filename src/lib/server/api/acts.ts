import type { ActKind } from '$lib/schemas/act';
import { outcome, request, type ActWanted } from '$lib/server/store/queries/act-requests';
import type { Tx } from '$lib/server/store/transaction';
import { accepted, ok, type Answer } from './answer';
import type { Instance } from './instance';
import { problem, type Problem } from './problem';

/** How long a route waits for the pipeline before it answers 202. */
export const WAIT_MS = 2_000;
const FIRST_LOOK_MS = 20;
const LONGEST_LOOK_MS = 100;

/** The pipeline's word on an act, or null when it had not taken it in time. */
export async function waitForOutcome(
	app: Instance,
	actId: number,
	waitMs = WAIT_MS
): Promise<string | null> {
	app.nudge();
	const endMs = performance.now() + waitMs;
	for (let lookMs = FIRST_LOOK_MS; ; lookMs = Math.min(LONGEST_LOOK_MS, lookMs * 1.5)) {
		const said = await outcome(app.store.db, actId);
		if (said !== null || performance.now() >= endMs) return said;
		await new Promise((resolve) => setTimeout(resolve, lookMs));
	}
}

/** 200 when done, 202 when not taken yet, 422 with the pipeline's reason. */
export async function answerAct(app: Instance, actId: number): Promise<Answer | Problem> {
	const said = await waitForOutcome(app, actId);
	if (said === null) return accepted({ act: actId, outcome: null });
	if (said === 'done') return ok({ act: actId, outcome: said });
	return problem(422, `The pipeline refused it: ${said}.`, { members: { act: actId } });
}

interface Writes {
	readonly app: Instance;
	readonly nowMs: number;
	readonly write: <T extends Answer | Problem>(work: (tx: Tx) => Promise<T>) => Promise<T>;
}

/** Writes one act, after `check` in the same transaction, and waits for what comes of it. */
export async function doAct<K extends ActKind>(
	ctx: Writes,
	wanted: ActWanted<K>,
	check: (tx: Tx) => Promise<Problem | null> = async () => null
): Promise<Answer | Problem> {
	let actId = 0;
	const written = await ctx.write<Answer | Problem>(async (tx) => {
		const trouble = await check(tx);
		if (trouble !== null) return trouble;
		actId = await request(tx.db, wanted, ctx.nowMs);
		return accepted({ act: actId, outcome: null });
	});
	return written.kind === 'problem' ? written : await answerAct(ctx.app, actId);
}
