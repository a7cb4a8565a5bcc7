import { createHash, randomBytes, timingSafeEqual } from 'node:crypto';

const FORM = /^lodekeep_([0-9a-z]{12})_([0-9a-f]{64})$/;

export interface KeyParts {
	publicId: string;
	secret: string;
}

/** `lodekeep_<id>_<secret>`: 60 bits of id, 256 bits of secret. */
export function newKeyParts(): KeyParts {
	return {
		publicId: randomBytes(6).toString('hex'),
		secret: randomBytes(32).toString('hex')
	};
}

export const keyText = ({ publicId, secret }: KeyParts): string => `lodekeep_${publicId}_${secret}`;

export function parseKey(text: string): KeyParts | null {
	const match = FORM.exec(text);
	return match === null ? null : { publicId: match[1] as string, secret: match[2] as string };
}

/** A plain hash is enough for 256 random bits; only the hash is stored. */
export const hashSecret = (secret: string): Buffer => createHash('sha256').update(secret).digest();

export const sameHash = (a: Buffer, b: Buffer): boolean =>
	a.length === b.length && timingSafeEqual(a, b);

/** The token of `Authorization: Bearer …`; null when another scheme or none was sent. */
export function bearerOf(header: string | null): string | null {
	const match = /^Bearer +([^\s]+)\s*$/i.exec(header ?? '');
	return match?.[1] ?? null;
}
