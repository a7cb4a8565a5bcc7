import { rm } from 'node:fs/promises';
import { createConnection } from 'mysql2/promise';
import { CONNECTION_OPTIONS, SESSION_SQL } from '$lib/server/store/connect';
import * as keeping from '$lib/server/store/queries/visit-keep';
import { VISIT_PARAMS } from './params';
import * as files from './photo-files';

/** A file without a row after this long belongs to a photo that was never taken. */
const ORPHAN_MS = 86_400_000;

export interface VisitsKept {
	namesDropped: number;
	photosDropped: number;
	orphans: number;
}

/**
 * Lets go of who was where (90 days, product.md 'Cautions') and of photos, which are kept as long as the
 * site's readings. The row of a photo goes first: nothing is shown whose file may be gone.
 */
export async function keepVisits(url: string, dataDir: string, nowMs: number): Promise<VisitsKept> {
	const sql = await createConnection({ uri: url, ...CONNECTION_OPTIONS });
	try {
		await sql.query(SESSION_SQL);
		const namesDropped = await keeping.dropNames(sql, nowMs - VISIT_PARAMS.namesMs);
		const over = await keeping.photosOver(sql, nowMs);
		await keeping.dropPhotos(
			sql,
			over.map(({ id }) => id)
		);
		for (const { file } of over) await files.remove(dataDir, file);
		let orphans = 0;
		for (const { file, path } of await files.olderThan(dataDir, nowMs - ORPHAN_MS)) {
			if (!path.endsWith('.part') && (await keeping.isKept(sql, file))) continue;
			await rm(path, { force: true });
			orphans++;
		}
		return { namesDropped, photosDropped: over.length, orphans };
	} finally {
		sql.destroy();
	}
}
