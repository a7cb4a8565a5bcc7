import { connect as connectTcp } from 'node:net';
import { readFile } from 'node:fs/promises';
import { join } from 'node:path';
import type { Config } from '../lib/server/config';
import { isEverywhere } from './environment';
import { logFileOf } from './log-files';
import { StartProblem } from './mariadb';
import { startNode, type Child } from './processes';

const READY_MS = 60_000;
const LOOK_MS = 100;
/** Open requests and the batch under way may end; see SHUTDOWN_TIMEOUT. */
const APP_STOP_MS = 20_000;
const BROKER_STOP_MS = 10_000;

/** Where this machine reaches what listens on `host`. */
export function reachable(host: string): string {
	if (!isEverywhere(host)) return host;
	return host === '::' ? '::1' : '127.0.0.1';
}

export async function startApp(config: Config, env: NodeJS.ProcessEnv): Promise<Child> {
	const entry =
		config.tls === null ? join('build', 'index.js') : join('src', 'launch', 'serve-tls.mjs');
	const logFile = logFileOf(config.dataDir, 'app');
	const child = startNode({
		name: 'app',
		args: ['--enable-source-maps', entry],
		env,
		logFile,
		stopMs: APP_STOP_MS
	});
	await untilListening(child, reachable(config.host), config.port, logFile);
	return child;
}

export async function startBroker(config: Config, env: NodeJS.ProcessEnv): Promise<Child> {
	const logFile = logFileOf(config.dataDir, 'broker');
	const child = startNode({
		name: 'broker',
		args: ['--import', 'tsx', join('src', 'launch', 'broker.ts')],
		env,
		logFile,
		stopMs: BROKER_STOP_MS
	});
	await untilListening(child, reachable(config.mqtt.host), config.mqtt.port, logFile);
	return child;
}

async function untilListening(
	child: Child,
	host: string,
	port: number,
	log: string
): Promise<void> {
	let ended = false;
	void child.ended.then(() => (ended = true));
	for (let waitedMs = 0; waitedMs < READY_MS; waitedMs += LOOK_MS) {
		if (ended) throw new StartProblem(`the ${child.name} did not start: ${await lastWords(log)}`);
		if (await listens(host, port)) return;
		await new Promise((resolve) => setTimeout(resolve, LOOK_MS));
	}
	await child.stop();
	throw new StartProblem(
		`the ${child.name} did not listen on port ${port} within ${READY_MS / 1000} s (see ${log}).`
	);
}

async function listens(host: string, port: number): Promise<boolean> {
	return await new Promise((resolve) => {
		const socket = connectTcp({ host, port });
		const answer = (yes: boolean) => {
			socket.destroy();
			resolve(yes);
		};
		socket.once('connect', () => {
			answer(true);
		});
		socket.once('error', () => {
			answer(false);
		});
	});
}

/** The last error in a log, for a person; the file holds the rest. */
async function lastWords(log: string): Promise<string> {
	const lines = (await readFile(log, 'utf8').catch(() => '')).trim().split('\n').slice(-40);
	const telling = lines.filter((text) => /error/i.test(text)).at(-1) ?? lines.at(-1) ?? '';
	return `${telling.trim().slice(0, 300)} (see ${log})`;
}
