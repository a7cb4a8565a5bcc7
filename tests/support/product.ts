import { spawn, type ChildProcess } from 'node:child_process';
import { mkdtemp, readFile, rm } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join, resolve } from 'node:path';
import type { RunFile } from '../../src/launch/run-file';

const ROOT = resolve(import.meta.dirname, '../..');

/** The whole product as `npm start` runs it. */
export interface Product {
	readonly process: ChildProcess;
	/** Everything it said so far. */
	said(): string;
	/** Resolves with its exit code when it has ended. */
	readonly ended: Promise<number | null>;
	/** Resolves when a line holds the text; rejects when the product ends before. */
	until(text: string, limitMs?: number): Promise<void>;
	runFile(): Promise<RunFile>;
	pidOf(part: string): Promise<number>;
}

export async function dataFolder(): Promise<{ dir: string; remove(): Promise<void> }> {
	const dir = await mkdtemp(join(tmpdir(), 'lodekeep-product-'));
	return {
		dir,
		remove: async () => {
			await rm(dir, { recursive: true, force: true });
		}
	};
}

/** Starts it on free ports, with its data in `dataDir`, without the demo unless `env` says so. */
export function startProduct(dataDir: string, env: Record<string, string> = {}): Product {
	const child = spawn(process.execPath, ['src/launch/start.mjs'], {
		cwd: ROOT,
		env: {
			PATH: process.env['PATH'],
			HOME: process.env['HOME'],
			...{ PORT: '0', MQTT_PORT: '0', LODEKEEP_DEMO: 'off', LODEKEEP_DATA: dataDir, ...env }
		},
		// A group of its own, like one at a terminal: Ctrl-C goes to the group.
		detached: true,
		stdio: ['ignore', 'pipe', 'pipe']
	});
	let text = '';
	for (const stream of [child.stdout, child.stderr])
		stream.on('data', (chunk: Buffer) => (text += chunk.toString()));
	const ended = new Promise<number | null>((resolveEnd) => child.once('close', resolveEnd));
	let hasEnded = false;
	void ended.then(() => (hasEnded = true));
	const runFile = async () =>
		JSON.parse(await readFile(join(dataDir, 'run.json'), 'utf8')) as RunFile;
	return {
		process: child,
		said: () => text,
		ended,
		until: async (wanted, limitMs = 110_000) => {
			const deadlineMs = Date.now() + limitMs;
			while (!text.includes(wanted)) {
				if (hasEnded || Date.now() > deadlineMs)
					throw new Error(`'${wanted}' was not said:\n${text}`);
				await new Promise((wait) => setTimeout(wait, 50));
			}
		},
		runFile,
		pidOf: async (part) => {
			const found = (await runFile()).children.find(({ name }) => name === part);
			if (found === undefined) throw new Error(`${part} does not run`);
			return found.pid;
		}
	};
}

export function isAlive(pid: number): boolean {
	try {
		process.kill(pid, 0);
		return true;
	} catch {
		return false;
	}
}
