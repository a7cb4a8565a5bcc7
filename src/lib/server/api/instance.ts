import type { NodeView } from '$lib/detection/types';
import { Devices, Sessions } from '$lib/server/auth/session';
import { LiveDirectory } from '$lib/server/auth/directory';
import { watchOwnerless } from '$lib/server/auth/ownerless';
import { Throttle } from '$lib/server/auth/throttle';
import { requireConfig, type Config } from '$lib/server/config';
import { createLog, type Log } from '$lib/server/log';
import { startNotices } from '$lib/server/notices/worker';
import { startSender, type Sender } from '$lib/server/outbox/sender';
import { createSecret, type Secret } from '$lib/server/secret';
import { connect, type Store } from '$lib/server/store/connect';
import { reachRows } from '$lib/server/store/queries/people';
import { startSupervisor, type SupervisorStatus } from '$lib/server/supervisor';
import { start as startUpkeep } from '$lib/server/upkeep';
import { CodedCache } from './compress';
import { RateLimiter } from './rate-limit';

/** What the app keeps while it runs. Nothing of it belongs to one request. */
export interface Instance {
	readonly config: Config;
	readonly log: Log;
	readonly store: Store;
	readonly secret: Secret;
	readonly directory: LiveDirectory;
	readonly sessions: Sessions;
	readonly devices: Devices;
	readonly throttle: Throttle;
	readonly limiter: RateLimiter;
	readonly coded: CodedCache;
	readonly sender: Sender;
	/** Mails that follow from what somebody just did are composed now. */
	readonly nudgeNotices: () => void;
	/** The pipeline looks for acts now. */
	readonly nudge: () => void;
	/** What detection holds of a node now; null while nothing is stored. */
	readonly nodeView: (nodeId: number) => Promise<NodeView | null>;
	readonly ingest: () => SupervisorStatus;
	/** Cookies carry Secure and the __Host- prefix. */
	readonly secureCookies: boolean;
	close(): Promise<void>;
}

const KEY = Symbol.for('lodekeep.instance');
type Kept = typeof globalThis & { [KEY]?: Instance };

/** The running instance; throws before `startInstance`. */
export function instance(): Instance {
	const running = (globalThis as Kept)[KEY];
	if (running === undefined) throw new Error('the app has not been started');
	return running;
}

/** Ends the one that an earlier load of hooks left behind, then starts anew. Waits for no database. */
export async function startInstance(
	env: Record<string, string | undefined> = process.env
): Promise<Instance> {
	await closeInstance();
	const running = create(requireConfig(env));
	(globalThis as Kept)[KEY] = running;
	return running;
}

export async function closeInstance(): Promise<void> {
	const kept = globalThis as Kept;
	const running = kept[KEY];
	delete kept[KEY];
	await running?.close();
}

function required(value: string | null, name: string): string {
	if (value === null) throw new Error(`${name} must be given: npm start sets it for the app.`);
	return value;
}

function create(config: Config): Instance {
	const log = createLog({ level: config.logLevel, part: 'app' });
	const databaseUrl = required(config.databaseUrl, 'DATABASE_URL');
	const store = connect(databaseUrl);
	const secretText = required(config.secret, 'LODEKEEP_SECRET');
	const secret = createSecret(secretText, config.secretPrevious);
	// Without ORIGIN a header that tells the scheme means a proxy that ends TLS.
	const secureCookies =
		config.origin?.startsWith('https:') ??
		(config.tls !== null || config.proxy.protocolHeader !== null);
	const sessionSecrets = [secretText, config.secretPrevious]
		.filter((text) => text !== null)
		.map((text) => createSecret(text).derive('session').toString('hex'));
	const sender = startSender({ db: store.db, secret, log, config });
	const ownerless = watchOwnerless({ db: store.db, secret, log, wake: sender.wake });
	const notices = startNotices({ store, secret, log, config, wake: sender.wake });
	const upkeep = startUpkeep({ databaseUrl, dataDir: config.dataDir }, log);
	const supervisor = startSupervisor({ config, store, secret, log });
	return {
		config,
		log,
		store,
		secret,
		directory: new LiveDirectory(async () => await reachRows(store.db)),
		sessions: new Sessions({ secrets: sessionSecrets, secure: secureCookies }),
		devices: new Devices(secret.derive('session')),
		throttle: new Throttle(),
		limiter: new RateLimiter(),
		coded: new CodedCache(),
		sender,
		nudgeNotices: () => {
			notices.nudge();
		},
		nudge: () => {
			supervisor.nudge();
		},
		nodeView: async (nodeId) => await supervisor.nodeView(nodeId),
		ingest: () => supervisor.status(),
		secureCookies,
		close: async () => {
			const parts = { supervisor, ownerless, notices, sender, upkeep, store };
			for (const [part, running] of Object.entries(parts)) {
				log.debug({ closing: part }, 'ends');
				await running.close();
			}
		}
	};
}
