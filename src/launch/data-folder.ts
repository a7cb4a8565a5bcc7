import { execFile } from 'node:child_process';
import { chmod, mkdir, readFile, writeFile } from 'node:fs/promises';
import { userInfo } from 'node:os';
import { join } from 'node:path';
import { promisify } from 'node:util';
import { z } from 'zod';
import { StartProblem } from './mariadb';

const run = promisify(execFile);

/** Raised when the files of the data folder change in a way that an older launcher would break. */
const LAYOUT = 1;

const FOLDER = z.object({
	layout: z.int().positive(),
	/** Version of MariaDB that last wrote `db`; null before the first time. */
	mariadb: z.string().nullable()
});

const pathOf = (dataDir: string) => join(dataDir, 'layout.json');

/** Makes the data folder, or makes sure that this launcher may use the one that is there. */
export async function openDataFolder(dataDir: string): Promise<void> {
	try {
		await mkdir(dataDir, { recursive: true, mode: 0o700 });
		await chmod(dataDir, 0o700);
		const found = await read(dataDir);
		if (found === null) await write(dataDir, null);
		else if (found.layout > LAYOUT)
			throw new StartProblem(
				`the data folder ${dataDir} was made by a newer Lodekeep (layout ${found.layout}, this one knows ${LAYOUT}). Start the newer version, or set LODEKEEP_DATA to another folder.`
			);
	} catch (error) {
		throw explain(error, dataDir);
	}
}

/** Turns what the file system says into a sentence. */
export function explain(error: unknown, dataDir: string): unknown {
	const { code } = error as NodeJS.ErrnoException;
	if (code === 'ENOSPC')
		return new StartProblem(
			`the disk of ${dataDir} is full. Free some space, or set LODEKEEP_DATA to a folder on another disk.`
		);
	if (code === 'EACCES' || code === 'EPERM' || code === 'EROFS')
		return new StartProblem(
			`this user may not write in ${dataDir}. Give it the folder, or set LODEKEEP_DATA to another one.`
		);
	if (code === 'ENOTDIR' || code === 'EEXIST')
		return new StartProblem(`${dataDir} is not a folder. Set LODEKEEP_DATA to another one.`);
	return error;
}

async function read(dataDir: string): Promise<z.infer<typeof FOLDER> | null> {
	const text = await readFile(pathOf(dataDir), 'utf8').catch(() => null);
	if (text === null) return null;
	try {
		return FOLDER.parse(JSON.parse(text));
	} catch {
		throw new StartProblem(
			`${pathOf(dataDir)} cannot be read. Restore it, or set LODEKEEP_DATA to another folder.`
		);
	}
}

async function write(dataDir: string, mariadb: string | null): Promise<void> {
	await writeFile(pathOf(dataDir), `${JSON.stringify({ layout: LAYOUT, mariadb })}\n`, {
		mode: 0o600
	});
}

/** '10.11' of 'mariadbd  Ver 10.11.6-MariaDB …'. */
export const seriesOf = (versionText: string) => /\bVer (\d+\.\d+)/.exec(versionText)?.[1] ?? null;

const isOlder = (a: string, b: string) => {
	const [aMajor = 0, aMinor = 0] = a.split('.').map(Number);
	const [bMajor = 0, bMinor = 0] = b.split('.').map(Number);
	return aMajor < bMajor || (aMajor === bMajor && aMinor < bMinor);
};

/** MariaDB's data can go to a newer series, never back to an older one. */
export async function checkMariadbSeries(dataDir: string): Promise<{ upgrade: boolean }> {
	const { stdout } = await run('mariadbd', ['--version']);
	const series = seriesOf(stdout);
	if (series === null || isOlder(series, '10.6'))
		throw new StartProblem(`MariaDB ${series ?? stdout.trim()} is too old. Install 10.6 or later.`);
	const before = (await read(dataDir))?.mariadb ?? null;
	if (before !== null && isOlder(series, before))
		throw new StartProblem(
			`the data folder ${dataDir} was written by MariaDB ${before}, and the one installed is ${series}. Install MariaDB ${before} or later.`
		);
	return { upgrade: before !== null && isOlder(before, series) };
}

/** Brings MariaDB's own tables to its series, when that is new, and notes the series. */
export async function settleMariadbSeries(dataDir: string, upgrade: boolean): Promise<void> {
	if (upgrade)
		await run(
			'mariadb-upgrade',
			['--no-defaults', '--socket=mariadb.sock', `--user=${userInfo().username}`],
			{ cwd: join(dataDir, 'db') }
		);
	const { stdout } = await run('mariadbd', ['--version']);
	await write(dataDir, seriesOf(stdout));
}
