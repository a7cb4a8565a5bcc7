import type { Config } from '../lib/server/config';
import { diskFree, HOLD_BYTES } from '../lib/server/disk';
import type { Store } from '../lib/server/store/connect';
import { reachable, startApp, startBroker } from './app';
import { buildWhenStale } from './build';
import { explain, openDataFolder } from './data-folder';
import { embeddedDatabase, readyStore, untilAnswers } from './database';
import { demoWanted, forgetFormerDemo, startSimulator } from './demo';
import { sizeOf, tellOfDemo } from './demo-progress';
import { addressOf, childEnvironment } from './environment';
import { keepLogsSmall, logFileOf, type LoggedPart } from './log-files';
import { startMailCatcher } from './mail';
import { freePort, StartProblem } from './mariadb';
import { demoPeople, firstAdmin, keepPasswords, passwordFile, type Made } from './people';
import { requireFree } from './ports';
import type { Child } from './processes';
import * as runFile from './run-file';
import { installationSecret } from './secrets';
import { supervise } from './supervise';

interface Part {
	name: string;
	stop(): Promise<void>;
	/** Nothing that a person knows of. */
	quiet?: true;
}

const say = (part: string, text: string) => {
	console.log(`${part.padEnd(10)} ${text}`);
};

/** Brings up database, broker, mail, app and demo, in this order, and takes them down in reverse. */
export class Launcher {
	#parts: Part[] = [];
	#record: runFile.RunRecord | null = null;
	#stopping = false;
	#starting: Promise<void> = Promise.resolve();
	readonly #building = new AbortController();
	#hopeless: (reason: string) => void = () => undefined;

	constructor(
		private config: Config,
		private readonly linkSecret: string
	) {}

	onHopeless(listener: (reason: string) => void): void {
		this.#hopeless = listener;
	}

	/** Resolves when every part is up; rejects with a StartProblem that a person can mend. */
	async start(): Promise<void> {
		this.#starting = this.#start().catch((error: unknown) => {
			throw explain(error, this.config.dataDir);
		});
		await this.#starting;
	}

	async stop(): Promise<void> {
		this.#stopping = true;
		this.#building.abort();
		await this.#starting.catch(() => undefined);
		for (const part of this.#parts.splice(0).reverse()) {
			await part.stop();
			if (part.quiet === undefined) say(part.name, 'stopped');
		}
		await this.#record?.remove();
	}

	async #start(): Promise<void> {
		await this.#claim();
		await this.#checkDisk();
		const endLogs = await keepLogsSmall(this.config.dataDir);
		this.#addQuiet('logs', endLogs);
		const secret = await installationSecret(this.config);
		const opening = this.#database().then(async (url) => ({
			databaseUrl: url,
			store: await this.#store(url, secret)
		}));
		// Nobody wants to wait for a build to be told that the secret is wrong.
		void opening.catch(() => {
			this.#building.abort();
		});
		const [opened, built] = await Promise.allSettled([opening, this.#build()]);
		if (opened.status === 'rejected') throw opened.reason as Error;
		if (built.status === 'rejected') throw built.reason as Error;
		const { store, databaseUrl } = opened.value;
		const made = { databaseUrl, secret, linkSecret: this.linkSecret };
		const env = childEnvironment(this.config, { ...made, mailPort: await this.#mail() });
		await this.#broker(env);
		await this.#app(env);
		await this.#people(store);
	}

	/** Takes the data folder, ends what a killed start left, and looks at the ports. */
	async #claim(): Promise<void> {
		const { dataDir } = this.config;
		await openDataFolder(dataDir);
		const port = this.config.port === 0 ? await freePort() : this.config.port;
		const mqttPort = this.config.mqtt.port === 0 ? await freePort() : this.config.mqtt.port;
		this.config = { ...this.config, port, mqtt: { ...this.config.mqtt, port: mqttPort } };
		const mine = await runFile.emptyRunFile(addressOf(this.config));
		const claim = await runFile.claim(dataDir, mine);
		if (!claim.ok) throw new StartProblem(claim.reason);
		this.#record = claim.record;
		if (claim.leftovers.length > 0)
			say('launcher', `ended what a killed start had left: ${claim.leftovers.join(', ')}`);
		const { host, mqtt, mqttUrl } = this.config;
		await requireFree(host, port, 'PORT');
		if (mqttUrl !== null) return;
		await requireFree(mqtt.host, mqttPort, 'MQTT_PORT');
		if (mqtt.tls !== null) await requireFree(mqtt.host, mqtt.tls.port, 'MQTT_TLS_PORT');
	}

	async #checkDisk(): Promise<void> {
		const { freeBytes, level } = await diskFree(this.config);
		const mb = Math.round(freeBytes / 1e6);
		if (level === 'low') say('disk', `WARNING: only ${mb} MB free under ${this.config.dataDir}`);
		if (level === 'hold')
			say(
				'disk',
				`WARNING: ${mb} MB free. Under ${HOLD_BYTES / 1e6} MB no reading is acknowledged; nodes keep theirs until there is room.`
			);
	}

	/** Resolves with the address for the app. */
	async #database(): Promise<string> {
		const { databaseUrl, dataDir } = this.config;
		if (databaseUrl !== null) {
			await untilAnswers(
				databaseUrl,
				() => this.#stopping,
				(text) => {
					say('database', text);
				}
			);
			say('database', `in use at ${new URL(databaseUrl).host}`);
			return databaseUrl;
		}
		let url = '';
		const start = embeddedDatabase(dataDir, async (pid) => {
			await this.#record?.remember('database', pid);
		});
		await this.#supervise('database', 'database', async () => {
			const server = await start();
			url = server.url;
			return { ...server, name: 'database' };
		});
		await this.#record?.rememberDatabase(url);
		say('database', `up on 127.0.0.1:${new URL(url).port}, data in ${dataDir}/db`);
		return url;
	}

	async #build(): Promise<void> {
		const begin = () => {
			say('build', 'making the app from its sources (up to a minute)');
		};
		if (await buildWhenStale(begin, this.#building.signal)) say('build', 'made');
	}

	async #store(url: string, secret: string): Promise<Store> {
		this.#goOn();
		const secrets = { current: secret, previous: this.config.secretPrevious };
		const store = await readyStore(url, secrets, (text) => {
			say('database', text);
		});
		this.#addQuiet('store', async () => {
			await store.close();
		});
		return store;
	}

	/** The catcher's port; 0 where real mail is sent. */
	async #mail(): Promise<number> {
		this.#goOn();
		if (this.config.smtpUrl !== null) {
			say('mail', `sent through ${new URL(this.config.smtpUrl).host}`);
			return 0;
		}
		const dir = `${this.config.dataDir}/mail`;
		const catcher = await startMailCatcher(dir);
		this.#parts.push({
			name: 'mail',
			stop: async () => {
				await catcher.close();
			}
		});
		say('mail', `caught on 127.0.0.1:${catcher.port}, kept in ${dir}`);
		return catcher.port;
	}

	async #broker(env: NodeJS.ProcessEnv): Promise<void> {
		this.#goOn();
		const { mqtt, mqttUrl } = this.config;
		if (mqttUrl !== null) {
			say('broker', `in use at ${new URL(mqttUrl).host}`);
			return;
		}
		await this.#supervise('broker', 'broker', async () => await startBroker(this.config, env));
		const tls = mqtt.tls === null ? '' : `, TLS on ${mqtt.tls.port}`;
		say('broker', `up on ${mqtt.host}:${mqtt.port}${tls}`);
	}

	async #app(env: NodeJS.ProcessEnv): Promise<void> {
		this.#goOn();
		await this.#supervise('app', 'app', async () => await startApp(this.config, env));
		say('app', `up on ${addressOf(this.config)}`);
	}

	/** First admin, demo, and the words that greet the person at the terminal. */
	async #people(store: Store): Promise<void> {
		this.#goOn();
		const demo = await demoWanted(store.db, this.config);
		const admin = await firstAdmin(store.db, this.config);
		const made = admin === null ? [] : [admin];
		if (demo === 'make') made.push(...(await demoPeople(store.db)));
		await keepPasswords(this.config, made);
		if (demo !== 'no') await this.#simulator(store, demo);
		this.#greet(made);
	}

	async #simulator(store: Store, demo: 'make' | 'make on' | 'go on'): Promise<void> {
		const { config } = this;
		const logFile = logFileOf(config.dataDir, 'simulator');
		const scheme = config.tls === null ? 'http' : 'https';
		const apiUrl = `${scheme}://${reachable(config.host)}:${config.port}`;
		const mqtt = { host: reachable(config.mqtt.host), port: config.mqtt.port };
		const options = { config, db: store.db, apiUrl, mqtt, logFile };
		if (demo === 'make') await forgetFormerDemo(config);
		const fromByte = await sizeOf(logFile);
		await this.#supervise(
			'simulator',
			'simulator',
			async () => await startSimulator(options),
			async () => await this.#isDemoWanted(store)
		);
		if (demo === 'go on') {
			say('demo', 'its vehicles come and go on');
			return;
		}
		const telling = tellOfDemo({
			...{ db: store.db, logFile, fromByte },
			isStopping: () => this.#stopping,
			say: (text) => {
				say('demo', text);
			}
		});
		this.#addQuiet('demo', async () => {
			await telling;
		});
	}

	/** The simulator ends by itself when an admin has taken the demo away. */
	async #isDemoWanted(store: Store): Promise<boolean> {
		const isWanted = (await demoWanted(store.db, this.config)) !== 'no';
		if (!isWanted) say('demo', 'was taken away; its simulator stays down');
		return isWanted;
	}

	#greet(made: Made[]): void {
		for (const { who, email, password } of made)
			say('sign-in', `${who}: ${email}  ${password ?? '(the password given)'}`);
		if (made.some(({ password }) => password !== null))
			say('sign-in', `shown this once; kept in ${passwordFile(this.config)}`);
		say('Lodekeep', `is up: ${addressOf(this.config)}   (Ctrl-C ends it)`);
	}

	async #supervise(
		name: string,
		log: LoggedPart | 'database',
		start: () => Promise<Child>,
		isWanted?: () => Promise<boolean>
	) {
		const { dataDir } = this.config;
		const logFile = log === 'database' ? `${dataDir}/db/mariadb.log` : logFileOf(dataDir, log);
		const part = await supervise({
			name,
			start,
			logFile,
			...(isWanted === undefined ? {} : { isWanted }),
			onStarted: async (child) => {
				await this.#record?.remember(name, child.pid);
			},
			say: (text) => {
				say(name, text);
			},
			onHopeless: (reason) => {
				// The demo is no reason to take a product away from its nodes.
				if (name === 'simulator') say('demo', `given up: ${reason}`);
				else this.#hopeless(reason);
			}
		});
		this.#parts.push(part);
	}

	#goOn(): void {
		if (this.#stopping) throw new StartProblem('it was told to stop.');
	}

	#addQuiet(name: string, close: () => void | Promise<void>): void {
		this.#parts.push({
			name,
			quiet: true,
			stop: async () => {
				await close();
			}
		});
	}
}
