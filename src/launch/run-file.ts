import { readFile, rename, rm, writeFile, open } from 'node:fs/promises';
import { join } from 'node:path';
import { z } from 'zod';
import { bootId, startTicks } from './processes';

const RUNNING = z.object({ name: z.string(), pid: z.int().positive(), ticks: z.string() });

/** What runs now; 0600, because it holds the database's address with its password. */
const RUN_FILE = z.object({
	boot: z.string(),
	launcher: RUNNING,
	children: z.array(RUNNING),
	/** Where people reach the product. */
	address: z.string(),
	/** Embedded database only. */
	databaseUrl: z.string().nullable()
});

export type Running = z.infer<typeof RUNNING>;
export type RunFile = z.infer<typeof RUN_FILE>;

const pathOf = (dataDir: string) => join(dataDir, 'run.json');

export async function readRunFile(dataDir: string): Promise<RunFile | null> {
	const text = await readFile(pathOf(dataDir), 'utf8').catch(() => null);
	if (text === null) return null;
	try {
		return RUN_FILE.parse(JSON.parse(text));
	} catch {
		// Cut short by a full disk or a kill: nothing in it can be trusted.
		return null;
	}
}

export const running = async (name: string, pid: number): Promise<Running> => ({
	name,
	pid,
	ticks: (await startTicks(pid)) ?? ''
});

const isAlive = async ({ pid, ticks }: Running) => (await startTicks(pid)) === ticks;

export type Claim =
	{ ok: true; record: RunRecord; leftovers: string[] } | { ok: false; reason: string };

/**
 * Takes the data folder for this launcher. What a killed start left behind is ended first: a process
 * only when both its id and its start time are those written down.
 */
export async function claim(dataDir: string, mine: RunFile): Promise<Claim> {
	const leftovers: string[] = [];
	for (;;) {
		if (await create(dataDir, mine))
			return { ok: true, record: new RunRecord(dataDir, mine), leftovers };
		const found = await readRunFile(dataDir);
		if (found !== null && found.boot === mine.boot) {
			if (await isAlive(found.launcher))
				return {
					ok: false,
					reason: `it is running here already (process ${found.launcher.pid}, ${found.address}). Stop that one first, or start with another LODEKEEP_DATA.`
				};
			leftovers.push(...(await endLeftovers(found.children)));
		}
		await rm(pathOf(dataDir), { force: true });
	}
}

/** False when there is one already. */
async function create(dataDir: string, content: RunFile): Promise<boolean> {
	try {
		const file = await open(pathOf(dataDir), 'wx', 0o600);
		await file.writeFile(JSON.stringify(content));
		await file.close();
		return true;
	} catch (error) {
		if ((error as NodeJS.ErrnoException).code === 'EEXIST') return false;
		throw error;
	}
}

/** What this launcher runs, kept on disk so that the next one can end it should this one be killed. */
export class RunRecord {
	#writing: Promise<void> = Promise.resolve();

	constructor(
		private readonly dataDir: string,
		private readonly content: RunFile
	) {}

	async remember(name: string, pid: number): Promise<void> {
		const child = await running(name, pid);
		const others = this.content.children.filter((other) => other.name !== name);
		this.content.children = [...others, child];
		await this.#write();
	}

	async rememberDatabase(url: string): Promise<void> {
		this.content.databaseUrl = url;
		await this.#write();
	}

	async remove(): Promise<void> {
		await this.#writing;
		await rm(pathOf(this.dataDir), { force: true });
	}

	/** One after the other: two parts may be started again at once. A full disk ends no part. */
	async #write(): Promise<void> {
		this.#writing = this.#writing.then(async () => {
			await rewrite(this.dataDir, this.content).catch(() => undefined);
		});
		await this.#writing;
	}
}

export async function rewrite(dataDir: string, content: RunFile): Promise<void> {
	const aside = `${pathOf(dataDir)}.new`;
	await writeFile(aside, JSON.stringify(content), { mode: 0o600 });
	await rename(aside, pathOf(dataDir));
}

export const emptyRunFile = async (address: string): Promise<RunFile> => ({
	boot: await bootId(),
	launcher: await running('launcher', process.pid),
	children: [],
	address,
	databaseUrl: null
});

/** How long a leftover may take to end by itself before it is killed, ms. */
const LEFTOVER_MS = 30_000;
const LOOK_MS = 50;

/** In the order of starting reversed: the database last. Returns the names of those that were alive. */
async function endLeftovers(children: Running[]): Promise<string[]> {
	const names: string[] = [];
	for (const child of [...children].reverse()) {
		if (!(await isAlive(child))) continue;
		names.push(child.name);
		signal(child.pid, 'SIGTERM');
		if (!(await endedWithin(child, LEFTOVER_MS))) signal(child.pid, 'SIGKILL');
		await endedWithin(child, LEFTOVER_MS);
	}
	return names;
}

async function endedWithin(child: Running, ms: number): Promise<boolean> {
	for (let waited = 0; waited < ms; waited += LOOK_MS) {
		if (!(await isAlive(child))) return true;
		await new Promise((resolve) => setTimeout(resolve, LOOK_MS));
	}
	return false;
}

function signal(pid: number, name: NodeJS.Signals): void {
	try {
		process.kill(pid, name);
	} catch {
		// Ended between the look and the signal.
	}
}
