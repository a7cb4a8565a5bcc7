import { readFile } from 'node:fs/promises';
import { join } from 'node:path';

export const MARK_CID = 'mark@lodekeep';

let kept: Promise<string | null> | null = null;

/** Our mark for the head of a mail, PNG in base64; null where the folder of static files is not at hand. */
export async function markPng(): Promise<string | null> {
	kept ??= readFile(join(process.cwd(), 'static', 'mark', 'mail-header.png')).then(
		(bytes) => bytes.toString('base64'),
		() => null
	);
	return await kept;
}
