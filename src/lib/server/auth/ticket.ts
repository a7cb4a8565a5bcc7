import { createHash, randomBytes } from 'node:crypto';

/** A one-time link's secret; the database holds only its hash. */
export function newTicket(): { text: string; hash: Buffer } {
	const text = randomBytes(32).toString('base64url');
	return { text, hash: hashTicket(text) };
}

export const hashTicket = (text: string): Buffer => createHash('sha256').update(text).digest();

export const looksLikeTicket = (text: string): boolean => /^[\w-]{43}$/.test(text);
