import { spawn } from 'node:child_process';
import { createHash } from 'node:crypto';
import { existsSync } from 'node:fs';
import { readFile, readdir, rm, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { alone } from './lock-file';
import { StartProblem } from './mariadb';

const MARK = join('build', '.lodekeep-sources');
const FILES = ['package-lock.json', 'svelte.config.js', 'vite.config.ts', 'tailwind.config.ts'];
const FOLDERS = ['src', 'static'];
/** Neither tests nor the launcher are part of what is built. */
const NOT_BUILT = /(^src\/launch\/|\.test\.ts$)/;

/** One hash over everything that the build is made of. */
export async function hashSources(): Promise<string> {
	const hash = createHash('sha256');
	for (const name of [...FILES, ...(await sourceFiles())].filter((file) => existsSync(file))) {
		hash.update(`${name}\0`);
		hash.update(await readFile(name));
	}
	return hash.digest('hex');
}

async function sourceFiles(): Promise<string[]> {
	const names: string[] = [];
	for (const folder of FOLDERS) {
		const entries = await readdir(folder, { recursive: true, withFileTypes: true });
		for (const entry of entries) if (entry.isFile()) names.push(join(entry.parentPath, entry.name));
	}
	return names.filter((name) => !NOT_BUILT.test(name)).sort();
}

/** Builds when the sources are not those of the last build. True when it did. */
export async function buildWhenStale(onBegin: () => void, signal?: AbortSignal): Promise<boolean> {
	if (await isFresh(await hashSources())) return false;
	onBegin();
	// Two builds at once would write over each other; the second finds the work done.
	return await alone(join('.svelte-kit', 'build.lock'), async () => {
		const hash = await hashSources();
		if (signal?.aborted === true || (await isFresh(hash))) return false;
		await rm(MARK, { force: true });
		await build(signal);
		await writeFile(MARK, hash);
		return true;
	});
}

async function isFresh(hash: string): Promise<boolean> {
	const before = await readFile(MARK, 'utf8').catch(() => '');
	return before === hash && existsSync(join('build', 'index.js'));
}

async function build(signal: AbortSignal | undefined): Promise<void> {
	const vite = join('node_modules', 'vite', 'bin', 'vite.js');
	const child = spawn(process.execPath, [vite, 'build', '--logLevel', 'warn'], {
		env: { ...process.env, NODE_ENV: 'production' },
		stdio: ['ignore', 'pipe', 'pipe'],
		...(signal === undefined ? {} : { signal })
	});
	// An abort is told as an error event; 'close' follows and ends the wait.
	child.on('error', () => undefined);
	let said = '';
	for (const stream of [child.stdout, child.stderr])
		stream.on('data', (chunk: Buffer) => (said = (said + chunk.toString()).slice(-4000)));
	const code = await new Promise<number | null>((resolve) => child.once('close', resolve));
	if (code === 0) return;
	const lines = said.split('\n').filter((text) => /error/i.test(text));
	throw new StartProblem(
		`the build did not succeed: ${lines[0] ?? said.trim().split('\n').at(-1) ?? 'no reason given'}`
	);
}
