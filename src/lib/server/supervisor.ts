import type { NodeView } from '$lib/detection/types';
import type { Config } from './config';
import { diskFree } from './disk';
import { holderName, isGone } from './ingest/holder';
import { periodic } from './ingest/periodic';
import type { PipelineStatus } from './ingest/pipeline-status';
import { readNodeView } from './ingest/node-view';
import { startService, type Every, type IngestService } from './ingest/service';
import { startSubscriber, type SubscriberConfig } from './ingest/subscriber';
import type { Subscriber } from './ingest/subscriber-types';
import type { Log } from './log';
import type { Secret } from './secret';
import type { Store } from './store/connect';
import * as lease from './store/queries/lease';

/** 'starting' until the database first answers, 'idle' while another copy runs the pipeline. */
export type SupervisorState = 'starting' | 'idle' | 'running';

export interface SupervisorStatus {
	state: SupervisorState;
	/** The broker is reached; null while this copy has no need of it. */
	brokerConnected: boolean | null;
	pipeline: PipelineStatus | null;
	/** Acknowledgements are held: less than 200 MB of disk are free. */
	diskFull: boolean;
}

export interface Supervisor {
	status(): SupervisorStatus;
	/** Acts, commands and registrations are looked at now. */
	nudge(): void;
	/** What detection holds of a node: from memory, or as stored when another copy or nobody has it loaded. */
	nodeView(nodeId: number): Promise<NodeView | null>;
	/** As `nodeView`, from memory alone. */
	nodeViewNow(nodeId: number): NodeView | null;
	close(): Promise<void>;
}

export interface SupervisorDeps {
	config: Pick<Config, 'mqttUrl' | 'mqtt' | 'linkSecret' | 'dataDir'>;
	store: Store;
	secret: Secret;
	log: Log;
	/** Tests make the periodic work quick. */
	every?: Partial<Every>;
}

/** A third of the lease: two tries may fail before it is lost. */
const LEASE_EVERY_MS = 5_000;
const DISK_EVERY_MS = 5_000;

/**
 * Keeps one ingest service running in the deployment: whoever holds the lease runs it, the others wait.
 * Returns at once and never gives up: database and broker may come later, go and come back.
 */
export function startSupervisor(deps: SupervisorDeps): Supervisor {
	const { store, log } = deps;
	const holder = holderName();
	let state: SupervisorState = 'starting';
	let service: IngestService | null = null;
	let subscriber: Subscriber | null = null;
	let diskFull = false;

	async function begin(): Promise<void> {
		subscriber ??= startSubscriber(subscriberConfig(deps.config));
		service = await startService({
			store,
			subscriber,
			secret: deps.secret,
			log,
			holder,
			mayStore: () => !diskFull,
			onLost: () => leaseWork.now(),
			...(deps.every === undefined ? {} : { every: deps.every })
		});
		state = 'running';
		log.info('ingest runs here');
	}

	async function end(): Promise<void> {
		const [running, link] = [service, subscriber];
		[service, subscriber] = [null, null];
		state = 'idle';
		// What was taken and not settled stays with the broker, for whoever runs the pipeline next.
		await running?.close();
		await link?.close();
	}

	async function look(): Promise<void> {
		const mine = await holdOr(false);
		if (mine && service === null) await begin();
		else if (!mine && service !== null) {
			log.warn('another copy has taken ingest over');
			await end();
		} else if (!mine) state = 'idle';
	}

	/** Without an answer from the database a running service goes on: it holds its batch by itself. */
	async function holdOr(otherwise: boolean): Promise<boolean> {
		try {
			if (await lease.hold(store.pool, lease.PIPELINE_LEASE, holder)) return true;
			const other = await lease.holderOf(store.pool, lease.PIPELINE_LEASE);
			if (other === null || !isGone(other)) return false;
			await lease.takeOver(store.pool, lease.PIPELINE_LEASE, other, holder);
			return await lease.hold(store.pool, lease.PIPELINE_LEASE, holder);
		} catch (error) {
			if (service !== null) {
				await subscriber?.vouchDirectory(false).catch(() => false);
				return true;
			}
			log.debug({ message: (error as Error).message }, 'the database does not answer yet');
			return otherwise;
		}
	}

	const leaseWork = periodic('lease', LEASE_EVERY_MS, log, look);
	const diskWork = periodic('disk', DISK_EVERY_MS, log, async () => {
		diskFull = (await diskFree(deps.config)).level === 'hold';
	});
	leaseWork.now();
	diskWork.now();
	return {
		status: () => ({
			state,
			brokerConnected: subscriber?.connected ?? null,
			pipeline: service?.pipeline.status() ?? null,
			diskFull
		}),
		nudge: () => service?.nudge(),
		nodeViewNow: (nodeId) => service?.pipeline.viewOf(nodeId) ?? null,
		nodeView: async (nodeId) =>
			service?.pipeline.viewOf(nodeId) ?? (await readNodeView(store.pool, nodeId)),
		close: async () => {
			await diskWork.close();
			await leaseWork.close();
			await end();
			await lease.release(store.pool, lease.PIPELINE_LEASE, holder).catch(() => undefined);
		}
	};
}

function subscriberConfig(
	config: Pick<Config, 'mqttUrl' | 'mqtt' | 'linkSecret'>
): SubscriberConfig {
	if (config.mqttUrl !== null) return { kind: 'external', url: config.mqttUrl };
	if (config.linkSecret === null)
		throw new Error('LODEKEEP_LINK_SECRET must be given: npm start sets it for app and broker.');
	return { kind: 'embedded', port: config.mqtt.port, linkSecret: config.linkSecret };
}
