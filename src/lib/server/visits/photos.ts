import { createHash } from 'node:crypto';
import { Mutex } from '$lib/server/ingest/mutex';
import type { Store } from '$lib/server/store/connect';
import * as records from '$lib/server/store/queries/visit-records';
import * as visits from '$lib/server/store/queries/visits';
import { transaction } from '$lib/server/store/transaction';
import { VISIT_PARAMS } from './params';
import { checkPhoto, type PhotoRefusal } from './photo-check';
import * as files from './photo-files';

export interface NewPhoto {
	siteId: number;
	visitId: number;
	stopId: number;
	/** UUID, made by the phone. */
	id: string;
	by: number;
	me: number;
	madeAtMs: number;
	bytes: Buffer;
}

export type PhotoTaken =
	| { ok: true; verdict: 'taken' | 'added'; again: boolean }
	| { ok: false; why: 'not_there' | 'not_yours' | 'id_used' | 'too_many' | PhotoRefusal };

/** Unpacking needs up to 200 MB: one picture at a time, however many are sent at once. */
const oneAtATime = new Mutex();

/** Checks, redraws and keeps a photo of a stop, once by its id; sent again it is answered, not kept twice. */
export async function add(
	parts: { store: Store; dataDir: string },
	photo: NewPhoto,
	nowMs: number
): Promise<PhotoTaken> {
	if (photo.by !== photo.me) return { ok: false, why: 'not_yours' };
	const sentSha256 = createHash('sha256').update(photo.bytes).digest('hex');
	const before = await records.photoById(parts.store.pool, photo.id);
	if (before !== null) return repeated(before, photo, sentSha256);
	const checked = await oneAtATime.run(async () => await checkPhoto(photo.bytes));
	if (!checked.ok) return { ok: false, why: checked.reason };
	const file = files.newFile();
	// Files first: a row never stands without its picture. What has no row is swept away in a day.
	await files.write(parts.dataDir, file, checked);
	const taken = await transaction(
		parts.store,
		async ({ sql }): Promise<PhotoTaken> => {
			const stop = await visits.lockStop(sql, photo);
			if (stop === null) return { ok: false, why: 'not_there' };
			const meanwhile = await records.photoById(sql, photo.id);
			if (meanwhile !== null) return repeated(meanwhile, photo, sentSha256);
			if ((await records.photoCount(sql, stop.id)) >= VISIT_PARAMS.photosAStop)
				return { ok: false, why: 'too_many' };
			const added = stop.outcome !== null && stop.endedBy !== photo.me;
			await records.insertPhoto(sql, {
				...{ id: photo.id, stopId: stop.id, personId: photo.me, file, sentSha256, added },
				...{ widthPx: checked.widthPx, heightPx: checked.heightPx },
				sizeBytes: checked.full.length,
				madeAtMs: Math.min(nowMs, Math.max(photo.madeAtMs, stop.walkTakenAtMs)),
				takenAtMs: nowMs
			});
			return { ok: true, verdict: added ? 'added' : 'taken', again: false };
		},
		({ ok }) => ok
	);
	if (!taken.ok || taken.again) await files.remove(parts.dataDir, file);
	return taken;
}

function repeated(before: records.PhotoRow, photo: NewPhoto, sentSha256: string): PhotoTaken {
	const same =
		before.stopId === photo.stopId &&
		before.sentSha256 === sentSha256 &&
		(before.personId ?? photo.me) === photo.me;
	return same
		? { ok: true, verdict: before.added === 1 ? 'added' : 'taken', again: true }
		: { ok: false, why: 'id_used' };
}

/** The picture's bytes; null when it is not there, or not of this walk. */
export async function open(
	parts: { store: Store; dataDir: string },
	o: { siteId: number; visitId: number; id: string },
	size: files.Size
): Promise<Buffer | null> {
	const row = await records.photoOf(parts.store.pool, o);
	return row === null ? null : await files.read(parts.dataDir, row.file, size);
}

/** Takes one's own photo back; an admin anybody's (a face, a plate). The id stays used. */
export async function drop(
	parts: { store: Store; dataDir: string },
	o: { siteId: number; visitId: number; id: string },
	by: { me: number; isAdmin: boolean }
): Promise<'done' | 'not_there' | 'not_yours'> {
	const row = await records.photoOf(parts.store.pool, o);
	if (row === null) return 'not_there';
	if (row.personId !== by.me && !by.isAdmin) return 'not_yours';
	await records.dropPhoto(parts.store.pool, o.id);
	await files.remove(parts.dataDir, row.file);
	return 'done';
}
