import { existsSync } from 'node:fs';
import { join } from 'node:path';
import { parseArgs } from 'node:util';
import { makeKey } from '../lib/server/auth/make-key';
import { readConfig, type Config } from '../lib/server/config';
import { connect } from '../lib/server/store/connect';
import { startMariadb } from './mariadb';
import { readRunFile } from './run-file';

/** `npm run key -- --name <text> --scopes a,b [--sites x,y]`: one new key on standard output, nothing else. */
const USAGE =
	'npm run key -- --name <text> --scopes occupancy,telemetry,provision,refresh,webhooks [--sites a,b]';

function fail(sentence: string): never {
	console.error(sentence);
	process.exit(1);
}

function readArguments() {
	try {
		const text = { type: 'string' } as const;
		const options = { name: text, scopes: text, sites: text };
		return parseArgs({ options, strict: true }).values;
	} catch (error) {
		return fail(`${(error as Error).message}\nUsage: ${USAGE}`);
	}
}

const listOf = (text: string) =>
	text
		.split(',')
		.map((item) => item.trim())
		.filter((item) => item !== '');

/** The database of the product that runs here, or the embedded one, started for a moment. */
async function openDatabase(config: Config): Promise<{ url: string; close(): Promise<void> }> {
	const nothing = { close: async () => undefined };
	if (config.databaseUrl !== null) return { url: config.databaseUrl, ...nothing };
	const running = await readRunFile(config.dataDir);
	if (running?.databaseUrl !== null && running?.databaseUrl !== undefined) {
		const { pid } = running.launcher;
		if (existsSync(`/proc/${pid}`)) return { url: running.databaseUrl, ...nothing };
	}
	const dir = join(config.dataDir, 'db');
	if (!existsSync(dir)) return fail('There is no database here yet: run npm start first.');
	const server = await startMariadb({ dir });
	return {
		url: server.url,
		close: async () => {
			await server.stop();
		}
	};
}

const { name, scopes, sites } = readArguments();
if (name === undefined || scopes === undefined) fail(`Usage: ${USAGE}`);
if (existsSync('.env')) process.loadEnvFile('.env');
const checked = readConfig(process.env);
if (!checked.ok) fail(checked.problems.join('\n'));
const database = await openDatabase(checked.config);
const store = connect(database.url, { connections: 1 });
const wanted = { name, scopes: listOf(scopes), sites: sites === undefined ? 'all' : listOf(sites) };
const made = await makeKey(store.db, { ...wanted, sites: wanted.sites as 'all' | string[] });
await store.close();
await database.close();
if (!made.ok) fail(`No key was made: ${made.reason}.`);
console.log(made.key);
