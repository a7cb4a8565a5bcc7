import { createHash } from 'node:crypto';
import type { Coding, Media } from './negotiate';

/** Raised when the shape of an answer changes, so that no stale form is revalidated. */
const FORM = '1';

/** Strong (RFC 9110, 8.8.3): the same tag only for the same bytes of one URL. */
export function etagOf(parts: readonly (string | number)[], media: Media, coding: Coding): string {
	const hash = createHash('sha256');
	for (const part of [FORM, media, coding, ...parts]) hash.update(`${part}\n`);
	return `"${hash.digest('base64url').slice(0, 22)}"`;
}

const opaque = (tag: string): string => tag.replace(/^W\//, '');

/** If-None-Match, weak comparison (RFC 9110, 8.8.3.2 and 13.1.2); a list with * among others is none. */
export function noneMatch(header: string | null, etag: string): boolean {
	if (header === null) return true;
	if (header.trim() === '*') return false;
	const tags = header.match(/(?:W\/)?"[^"]*"/g) ?? [];
	return !tags.some((tag) => opaque(tag) === opaque(etag));
}
