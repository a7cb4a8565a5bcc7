import type { Outcome } from '$lib/detection/types';
import type { Registry } from '../registry';
import type { Work } from '../work';

/** What an ask of this age is no longer worth: a backlog's question was answered by its next rows. */
const ASK_AGE_MS = 600_000;
/** How long a command of ingest's own may wait for its node. */
const EXPIRES_MS = 3_600_000;
/** The fast habit while placing, learning and proving (method 3). */
export const FAST_PERIOD_S = 2;
const LEAST_DELTA_MG = 8;
const DELTA_SIGMAS = 8;

/** delta_mg = max(8, 8 sigma), so that noise starts no bursts (method 10). */
export const deltaFor = (sigmaMg: number | null): number =>
	Math.max(LEAST_DELTA_MG, Math.ceil(DELTA_SIGMAS * (sigmaMg ?? 0)));

/**
 * Outcomes that are neither entered nor voided history. A replay asks nothing of nodes that live ingest
 * has asked before; only the usual habit is put back again, since that does no harm twice.
 */
export function takeAside(
	registry: Registry,
	work: Work,
	outcome: Exclude<Outcome, { kind: 'enter' | 'void' }>,
	live: boolean
): void {
	switch (outcome.kind) {
		case 'learned':
			work.learned.push(outcome);
			break;
		case 'accepted':
			work.accepted.push(outcome);
			break;
		case 'pulse_judged':
			work.judged.push(outcome);
			break;
		case 'act_done':
			work.actsDone.set(outcome.actId, outcome.ok ? 'done' : (outcome.why ?? 'refused'));
			break;
		case 'ask':
			if (work.nowMs - outcome.atMs > ASK_AGE_MS) break;
			if (live || outcome.verb === 'report_habit') ask(registry, work, outcome);
	}
}

type Ask = Extract<Outcome, { kind: 'ask' }>;

function ask(registry: Registry, work: Work, { nodeId, verb, cause }: Ask): void {
	const entry = registry.byId(nodeId);
	if (entry === undefined) return;
	const base = {
		nodeId,
		boot: entry.live.heardBoot ?? 0,
		byActor: 'rule',
		createdAtMs: work.nowMs,
		expiresAtMs: work.nowMs + EXPIRES_MS
	};
	const report = (periodS: number, why: string) =>
		work.commands.push({
			...base,
			verb: 'report',
			report: { periodS, deltaMg: entry.config.deltaMg },
			cause: why.slice(0, 64)
		});
	if (verb === 'pair') work.commands.push({ ...base, verb: 'pair', report: null, cause });
	else if (verb === 'report_fast') report(FAST_PERIOD_S, cause);
	else if (verb === 'report_habit') report(entry.config.usualPeriodS, 'habit');
	// No verb asks for one reading: a fast habit brings one at once, and the keeper puts the usual back.
	else report(FAST_PERIOD_S, `ask: ${cause}`);
}
