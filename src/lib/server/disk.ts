import { mkdir, statfs } from 'node:fs/promises';
import type { Config } from './config';

/** Under this much the start warns. */
export const WARN_BYTES = 1_000_000_000;
/** Under this much no reading is acknowledged: what the database cannot store must stay with the node. */
export const HOLD_BYTES = 200_000_000;

export interface DiskFree {
	freeBytes: number;
	level: 'ok' | 'low' | 'hold';
}

/** Room on the disk of the data folder that the product may use. */
export async function diskFree(config: Pick<Config, 'dataDir'>): Promise<DiskFree> {
	await mkdir(config.dataDir, { recursive: true, mode: 0o700 });
	const { bavail, bsize } = await statfs(config.dataDir);
	return judge(bavail * bsize);
}

export function judge(freeBytes: number): DiskFree {
	if (freeBytes < HOLD_BYTES) return { freeBytes, level: 'hold' };
	return { freeBytes, level: freeBytes < WARN_BYTES ? 'low' : 'ok' };
}
