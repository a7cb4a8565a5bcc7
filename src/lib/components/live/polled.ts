import { ask } from './ask';
import { session } from './session.svelte';

/**
 * Asks a path of this application's own pages and lets the session know how it went: a 401 is said on the
 * sheet, an answer takes that back. `onanswer` gets the time of the answer, ms.
 */
export async function heeded<T>(path: string, onanswer?: (atMs: number) => void): Promise<T> {
	try {
		const { body } = await ask<T>(path);
		session.answered();
		onanswer?.(Date.now());
		return body;
	} catch (error) {
		session.heed(error);
		throw error;
	}
}

/** A poll comes again by itself: no retries in between, and also where the browser thinks it is offline. */
export const quietly = { retry: false, networkMode: 'always' as const };
