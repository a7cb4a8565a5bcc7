import { copyFile, mkdir, stat, truncate } from 'node:fs/promises';
import { join } from 'node:path';

/** A log grows to this at most twice: itself and the one before it. */
const LARGEST_BYTES = 50_000_000;
const LOOK_MS = 600_000;

export const PARTS = ['app', 'broker', 'simulator'] as const;
export type LoggedPart = (typeof PARTS)[number];

export const logFileOf = (dataDir: string, part: LoggedPart) => join(dataDir, 'log', `${part}.log`);

/** Makes the folder and keeps its files small from now on. Returns what ends that. */
export async function keepLogsSmall(dataDir: string): Promise<() => void> {
	await mkdir(join(dataDir, 'log'), { recursive: true, mode: 0o700 });
	await turnOver(dataDir);
	const timer = setInterval(() => void turnOver(dataDir), LOOK_MS);
	return () => {
		clearInterval(timer);
	};
}

/** The writers hold the files open for appending: copied and cut, never renamed. */
async function turnOver(dataDir: string): Promise<void> {
	for (const part of PARTS) {
		const file = logFileOf(dataDir, part);
		const size = await stat(file).then(
			(found) => found.size,
			() => 0
		);
		if (size < LARGEST_BYTES) continue;
		await copyFile(file, `${file}.1`).catch(() => undefined);
		await truncate(file).catch(() => undefined);
	}
}
