import { hostsOf, viewOf } from './batch';
import type { HearingWatch } from './hearing-watch';
import { inService, type NodeEntry } from './node-entry';
import type { Pipeline } from './pipeline';
import { storeResults } from './steps/store';
import { Work } from './work';

/** Method 4, silent: nothing heard for 3 reporting periods, 5 min at the least. */
const SILENT_PERIODS = 3;
const SILENT_LEAST_MS = 300_000;

export interface SilenceVerdict {
	silent: boolean;
	/** The grace time is over too: the state is not known. */
	lost: boolean;
}

/** Judges one node by how long it could have been heard and was not. */
export function judgeSilence(unheardMs: number, periodS: number, graceS: number): SilenceVerdict {
	const silent = unheardMs > Math.max(SILENT_LEAST_MS, SILENT_PERIODS * periodS * 1000);
	return { silent, lost: silent && unheardMs > graceS * 1000 };
}

/** Looks at all nodes and stores what their silence changes. Runs between batches. */
export async function lookForSilence(
	pipeline: Pipeline,
	watch: HearingWatch,
	nowMs: number
): Promise<number> {
	const changed = changedNodes(pipeline, watch, nowMs);
	if (changed.length === 0) return 0;
	return await pipeline.exclusive(async () => await storeSilence(pipeline, changed, nowMs));
}

interface Changed {
	entry: NodeEntry;
	verdict: SilenceVerdict;
}

function changedNodes(pipeline: Pipeline, watch: HearingWatch, nowMs: number): Changed[] {
	const changed: Changed[] = [];
	for (const entry of pipeline.room.registry.all()) {
		if (!inService(entry)) continue;
		const { live, config } = entry;
		const sinceMs = live.heardAtMs ?? config.placedAtMs ?? nowMs;
		const graceS = config.member?.graceS ?? 900;
		const verdict = judgeSilence(watch.unheardMs(sinceMs, nowMs), config.periodS, graceS);
		const tells = verdict.lost && live.silence.unknown === null && isKnown(entry);
		if (verdict.silent !== live.silence.silent || tells) changed.push({ entry, verdict });
	}
	return changed;
}

const isKnown = ({ live }: NodeEntry): boolean =>
	live.shown !== null && live.shown.state !== 'unknown' && live.pointer !== null;

async function storeSilence(
	pipeline: Pipeline,
	changed: readonly Changed[],
	nowMs: number
): Promise<number> {
	const { room } = pipeline;
	const work = new Work(room.stamps.next(), nowMs);
	await room.groups.load(
		room.pool,
		changed.map(({ entry }) => entry.id),
		nowMs
	);
	try {
		for (const one of changed) tellSilence(pipeline, work, one, nowMs);
		await room.transactions.run(async (sql) => {
			await storeResults(sql, work, hostsOf(room));
		});
	} catch (error) {
		// What is stored is what is known: the next look judges anew.
		await room.registry.loadLives(
			room.pool,
			changed.map(({ entry }) => entry.id)
		);
		throw error;
	}
	return changed.length;
}

function tellSilence(
	{ room }: Pipeline,
	work: Work,
	{ entry, verdict }: Changed,
	nowMs: number
): void {
	const { live, config } = entry;
	live.silence.silent = verdict.silent;
	work.touched.add(entry);
	const view = viewOf(room, entry);
	if (!verdict.lost || live.silence.unknown !== null || live.pointer === null) return;
	if (view === null || view.state === 'unknown' || config.bayId === null) return;
	// The same time that history will give it, should the rows show the gap (detection/silence.ts).
	const atMs = live.pointer.atMs + (config.member?.graceS ?? 0) * 1000;
	const silence = live.silence;
	silence.unknown = { eventId: 0, atMs };
	work.loose.push({
		siteId: config.siteId,
		event: {
			bayId: config.bayId,
			nodeId: entry.id,
			type: 'unknown',
			state: 'unknown',
			atMs: Math.min(atMs, nowMs),
			confidence20: null,
			uncertaintyS: 0,
			late: false,
			voids: null,
			evidence: JSON.stringify({ because: ['the node is not heard'], against: [] })
		},
		told: (eventId) => (silence.unknown = { eventId, atMs })
	});
}
