import { startDrift } from '$lib/server/drift/start';
import type { Log } from '$lib/server/log';
import { RefreshWorker } from '$lib/server/refreshes/worker';
import type { Secret } from '$lib/server/secret';
import type { Store } from '$lib/server/store/connect';
import { noteNetworks } from '$lib/server/store/queries/node-networks';
import { endClosures } from './closure-ends';
import { CommandSender } from './command-sender';
import { replayMarked } from './far-replay';
import { keepHabits } from './habit-keeper';
import { HearingWatch } from './hearing-watch';
import { periodic, type Periodic } from './periodic';
import { startPipeline, type Pipeline } from './pipeline';
import { lookForSilence } from './silence';
import { SiteWatch } from './site-watch';
import type { Subscriber } from './subscriber-types';

export interface ServiceDeps {
	store: Store;
	subscriber: Subscriber;
	secret: Secret;
	log: Log;
	holder: string;
	mayStore: () => boolean;
	onLost: () => void;
	/** Pauses of the periodic work, ms; tests make them short. */
	every?: Partial<Every>;
}

export interface Every {
	directoryMs: number;
	registryMs: number;
	hearingMs: number;
	commandsMs: number;
	habitsMs: number;
	replayMs: number;
	closuresMs: number;
	networksMs: number;
	refreshesMs: number;
	driftMs: number;
}

export const EVERY: Every = {
	directoryMs: 2_000,
	registryMs: 30_000,
	hearingMs: 5_000,
	commandsMs: 1_000,
	habitsMs: 15_000,
	replayMs: 5_000,
	closuresMs: 5_000,
	networksMs: 5_000,
	refreshesMs: 2_000,
	driftMs: 15_000
};

/** A backlog older than this is still being worked off: silence cannot be judged yet. */
const CAUGHT_UP_MS = 15_000;

const NETWORKS_AT_ONCE = 1_000;

/** The pipeline with all its periodic work: what runs while this copy holds the lease. */
export interface IngestService {
	readonly pipeline: Pipeline;
	nudge(): void;
	/** Silence is judged now, as the timer would. */
	judge(nowMs?: number): Promise<void>;
	close(): Promise<void>;
}

/** Throws while the database does not answer; the caller tries again. */
export async function startService(deps: ServiceDeps): Promise<IngestService> {
	const { subscriber, log } = deps;
	const { pool } = deps.store;
	const every = { ...EVERY, ...deps.every };
	const watch = new HearingWatch();
	await watch.load(pool, Date.now());
	const pipeline = await startPipeline(deps);
	const { registry } = pipeline.room;
	const sender = new CommandSender(registry, subscriber);
	const sites = new SiteWatch();
	await subscriber.replaceDirectory(registry.directory(Date.now()));

	const tellDirectory = async (): Promise<void> => {
		const { entries, removed } = registry.directoryChanges(Date.now());
		await pool.query('SELECT 1');
		await subscriber.updateDirectory(entries, removed);
	};
	const readRegistry = async (): Promise<void> => {
		await pipeline.exclusive(async () => {
			await registry.loadAll(pool, Date.now());
			pipeline.room.groups.reconcile();
		});
		await tellDirectory();
	};
	const judge = async (nowMs = Date.now()): Promise<void> => {
		const { hold, oldestPendingMs } = pipeline.status();
		const behindMs = oldestPendingMs === null ? 0 : Date.now() - oldestPendingMs;
		if (!subscriber.connected || hold !== null || behindMs > CAUGHT_UP_MS) {
			watch.deaf();
			return;
		}
		await watch.hears(pool, nowMs);
		await lookForSilence(pipeline, watch, nowMs);
		await sites.look(pipeline, nowMs);
	};
	/** Kept until it is written: the broker tells a change once. */
	const untold = new Map<string, string>();
	const networks = async (): Promise<void> => {
		for (const [serial, network] of subscriber.takeNetworks()) untold.set(serial, network);
		const part = new Map([...untold].slice(0, NETWORKS_AT_ONCE));
		await noteNetworks(pool, part, Date.now());
		for (const [serial, network] of part) if (untold.get(serial) === network) untold.delete(serial);
	};
	const works: Periodic[] = [
		periodic('directory', every.directoryMs, log, tellDirectory),
		periodic('silence', every.hearingMs, log, judge),
		periodic('replay', every.replayMs, log, async () => {
			while (await replayMarked(pipeline));
		}),
		periodic('habits', every.habitsMs, log, async () => await keepHabits(pipeline, Date.now())),
		periodic('networks', every.networksMs, log, networks),
		periodic('closures', every.closuresMs, log, async () => await endClosures(pipeline, Date.now()))
	];
	const worker = new RefreshWorker(deps.store, log);
	const refreshes = periodic('film refreshes', every.refreshesMs, log, async () => {
		await worker.look(Date.now());
	});
	const drift = startDrift(deps, pipeline, every.driftMs);
	const reread = periodic('registry', every.registryMs, log, readRegistry);
	const commands = periodic('commands', every.commandsMs, log, async () => {
		if (subscriber.connected) await sender.send(pool, Date.now());
	});
	subscriber.onConnected((connected) => {
		if (!connected) watch.deaf();
	});
	return {
		pipeline,
		nudge: () => {
			reread.now();
			commands.now();
			refreshes.now();
			pipeline.nudge();
		},
		judge,
		close: async () => {
			await Promise.all(
				[...works, reread, commands, refreshes, drift].map(async (work) => await work.close())
			);
			await pipeline.close();
		}
	};
}
