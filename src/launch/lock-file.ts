import { mkdir, open, readFile, rm } from 'node:fs/promises';
import { dirname } from 'node:path';
import { startTicks } from './processes';

const LOOK_MS = 200;

/**
 * Does some work while no other process does work under the same file. A holder that was killed holds
 * nothing: it is known by its process id and start time.
 */
export async function alone<T>(file: string, work: () => Promise<T>): Promise<T> {
	await mkdir(dirname(file), { recursive: true });
	const mine = `${process.pid} ${(await startTicks(process.pid)) ?? ''}`;
	while (!(await take(file, mine))) await new Promise((resolve) => setTimeout(resolve, LOOK_MS));
	try {
		return await work();
	} finally {
		await rm(file, { force: true });
	}
}

async function take(file: string, mine: string): Promise<boolean> {
	try {
		const handle = await open(file, 'wx');
		await handle.writeFile(mine);
		await handle.close();
		return true;
	} catch (error) {
		if ((error as NodeJS.ErrnoException).code !== 'EEXIST') throw error;
	}
	const [pid = '', ticks = ''] = (await readFile(file, 'utf8').catch(() => '')).split(' ');
	// Empty between the other's open and write: look again.
	if (ticks !== '' && (await startTicks(Number(pid))) !== ticks) await rm(file, { force: true });
	return false;
}
