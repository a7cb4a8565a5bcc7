import { periodic, type Periodic } from '$lib/server/ingest/periodic';
import type { Pipeline } from '$lib/server/ingest/pipeline';
import { Transactions } from '$lib/server/ingest/transaction';
import type { Log } from '$lib/server/log';
import type { Store } from '$lib/server/store/connect';
import { DRIFT_TIMES, DriftJob } from './job';

/**
 * Drift beside the pipeline, while this copy holds its lease: a connection of its own, so that the closing of an
 * hour never holds a batch up. `close` ends it after the hour in hand.
 */
export function startDrift(
	{ store, holder, log }: { store: Store; holder: string; log: Log },
	pipeline: Pipeline,
	everyMs: number
): Periodic {
	const transactions = new Transactions(async () => await store.batchConnection(), holder);
	const job = new DriftJob(pipeline, transactions);
	const startedMs = Date.now();
	const work = periodic('drift', everyMs, log, async () => {
		const nowMs = Date.now();
		if (nowMs - startedMs < DRIFT_TIMES.startMs) return;
		const hours = await job.look(nowMs);
		if (hours > 1) log.info({ hours, ms: Date.now() - nowMs }, 'drift: hours closed');
	});
	return {
		now: () => work.now(),
		close: async () => {
			job.close();
			await work.close();
			transactions.close();
		}
	};
}
