import { mkdir, rm } from 'node:fs/promises';
import { join } from 'node:path';
import type { Config } from '../lib/server/config';
import { makeKey } from '../lib/server/auth/make-key';
import type { Database } from '../lib/server/store/connect';
import * as installation from '../lib/server/store/queries/installation';
import { DEMO_KEY } from '../lib/server/store/queries/demo';
import * as firstStart from '../lib/server/store/queries/first-start';

import { startNode, type Child } from './processes';

const KEY_NAME = DEMO_KEY;
/** Set while the demo's site is being made; gone when it is marked as the demo's. */
const BEGUN = 'demo_begun';

/**
 * Whether this start runs the demo: 'make' on an empty installation, 'go on' with its site there.
 * A demo that was begun and whose site nobody marked yet (killed in between) is made on, too.
 */
export async function demoWanted(
	db: Database,
	config: Config
): Promise<'make' | 'make on' | 'go on' | 'no'> {
	if (!config.demo || config.databaseUrl !== null || config.mqttUrl !== null) return 'no';
	const sites = await firstStart.countSites(db);
	if (sites.demo > 0) return 'go on';
	if (sites.ever === 0) {
		await installation.overwrite(db, BEGUN, Buffer.from('1'));
		return 'make';
	}
	return (await installation.read(db, BEGUN)) === null ? 'no' : 'make on';
}

/** A key for the simulator alone; the one of the former start ends. */
async function simulatorKey(db: Database): Promise<string> {
	await firstStart.revokeKeys(db, KEY_NAME, Date.now());
	const made = await makeKey(db, {
		name: KEY_NAME,
		scopes: ['occupancy', 'telemetry', 'provision'],
		sites: 'all'
	});
	if (!made.ok) throw new Error(made.reason);
	return made.key;
}

export interface SimulatorOptions {
	config: Config;
	db: Database;
	/** The app's address for other programs of this machine. */
	apiUrl: string;
	mqtt: { host: string; port: number };
	logFile: string;
}

/** From now on a site without the mark is nobody's demo. */
export async function demoMade(db: Database): Promise<void> {
	await installation.remove(db, BEGUN);
}

export const demoDir = (config: Config) => join(config.dataDir, 'demo');

/** What a simulator of a former database remembers is of no use to a new one. */
export async function forgetFormerDemo(config: Config): Promise<void> {
	await rm(demoDir(config), { recursive: true, force: true });
}

const STOP_MS = 5_000;

/** The simulator makes the site over the API, sends a week of history and goes on living. */
export async function startSimulator(options: SimulatorOptions): Promise<Child> {
	const dir = demoDir(options.config);
	await mkdir(dir, { recursive: true, mode: 0o700 });
	return startNode({
		name: 'simulator',
		args: ['--import', 'tsx', 'simulator/main.ts'],
		env: {
			PATH: process.env['PATH'],
			NODE_ENV: 'production',
			// On loopback; the certificate is for the name that people use.
			...(options.apiUrl.startsWith('https:') ? { NODE_TLS_REJECT_UNAUTHORIZED: '0' } : {}),
			LODEKEEP_API_URL: options.apiUrl,
			LODEKEEP_API_KEY: await simulatorKey(options.db),
			MQTT_HOST: options.mqtt.host,
			MQTT_PORT: String(options.mqtt.port),
			SIMULATOR_DIR: dir,
			LOG_LEVEL: options.config.logLevel
		},
		logFile: options.logFile,
		stopMs: STOP_MS
	});
}
