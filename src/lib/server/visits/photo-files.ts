import { randomBytes } from 'node:crypto';
import { mkdir, readdir, readFile, rename, rm, stat, writeFile } from 'node:fs/promises';
import { join } from 'node:path';

/** A photo's two files lie under LODEKEEP_DATA/photos/<first two digits>/ by a random name of our own. */
const NAME = /^[0-9a-f]{32}$/;
export type Size = 'full' | 'small';

export const newFile = (): string => randomBytes(16).toString('hex');

function pathOf(dataDir: string, file: string, size: Size): string {
	// Names come from our own table; anything else is a bug, and never a path.
	if (!NAME.test(file)) throw new RangeError('Not the name of a photo.');
	return join(dataDir, 'photos', file.slice(0, 2), `${file}-${size}.jpg`);
}

/** Each file appears whole: written beside its place and moved there. */
export async function write(
	dataDir: string,
	file: string,
	photo: { full: Buffer; small: Buffer }
): Promise<void> {
	for (const size of ['full', 'small'] as const) {
		const path = pathOf(dataDir, file, size);
		await mkdir(join(path, '..'), { recursive: true, mode: 0o700 });
		await writeFile(`${path}.part`, photo[size], { mode: 0o600 });
		await rename(`${path}.part`, path);
	}
}

/** null where the file is gone. */
export async function read(dataDir: string, file: string, size: Size): Promise<Buffer | null> {
	try {
		return await readFile(pathOf(dataDir, file, size));
	} catch (error) {
		if (error instanceof Error && 'code' in error && error.code === 'ENOENT') return null;
		throw error;
	}
}

export async function remove(dataDir: string, file: string): Promise<void> {
	for (const size of ['full', 'small'] as const)
		await rm(pathOf(dataDir, file, size), { force: true });
}

/** Names of photos whose files are older than an instant, part files among them. */
export async function olderThan(
	dataDir: string,
	beforeMs: number
): Promise<{ file: string; path: string }[]> {
	const root = join(dataDir, 'photos');
	const found: { file: string; path: string }[] = [];
	for (const dir of await readdir(root).catch(() => []))
		for (const name of await readdir(join(root, dir)).catch(() => [])) {
			const path = join(root, dir, name);
			const { mtimeMs } = await stat(path).catch(() => ({ mtimeMs: Infinity }));
			if (mtimeMs < beforeMs) found.push({ file: name.slice(0, 32), path });
		}
	return found;
}
