import { createCipheriv, createDecipheriv, hkdfSync, randomBytes } from 'node:crypto';

/** What a sealed value is for; each purpose has a key of its own. */
export type Purpose =
	| 'node key'
	| 'outbox'
	| 'idempotency'
	| 'webhook secret'
	| 'session'
	| 'check'
	| 'mail link'
	| 'waiting';

export type Opened =
	| { ok: true; bytes: Buffer; /** Sealed under the former secret. */ previous: boolean }
	| { ok: false; reason: 'wrong_secret_or_altered' };

export interface Secret {
	/** AES-256-GCM: iv 12 · tag 16 · cipher, bound to `aad` (for a node key: the node's id). */
	seal(purpose: Purpose, aad: string | number, bytes: Uint8Array): Buffer;
	open(purpose: Purpose, aad: string | number, sealed: Uint8Array): Opened;
	/** 32 bytes for a purpose that needs a key itself (signing sessions). */
	derive(purpose: Purpose): Buffer;
}

const IV_BYTES = 12;
const TAG_BYTES = 16;

/** HKDF-SHA-256 (RFC 5869) of the installation's secret; the purpose is its info. */
const deriveKey = (secret: string, purpose: Purpose): Buffer =>
	Buffer.from(hkdfSync('sha256', secret, 'lodekeep 1', purpose, 32));

/** Keys are made once a purpose and kept in memory. */
function keyring(secret: string): (purpose: Purpose) => Buffer {
	const keys = new Map<Purpose, Buffer>();
	return (purpose) => {
		const key = keys.get(purpose) ?? deriveKey(secret, purpose);
		keys.set(purpose, key);
		return key;
	};
}

export function createSecret(current: string, previous: string | null = null): Secret {
	const now = keyring(current);
	const before = previous === null ? null : keyring(previous);
	return {
		seal: (purpose, aad, bytes) => seal(now(purpose), aad, bytes),
		open: (purpose, aad, sealed) => {
			const bytes = open(now(purpose), aad, sealed);
			if (bytes !== null) return { ok: true, bytes, previous: false };
			const older = before === null ? null : open(before(purpose), aad, sealed);
			return older === null
				? { ok: false, reason: 'wrong_secret_or_altered' }
				: { ok: true, bytes: older, previous: true };
		},
		derive: (purpose) => now(purpose)
	};
}

function seal(key: Buffer, aad: string | number, bytes: Uint8Array): Buffer {
	const iv = randomBytes(IV_BYTES);
	const cipher = createCipheriv('aes-256-gcm', key, iv);
	cipher.setAAD(Buffer.from(String(aad)));
	const sealed = Buffer.concat([cipher.update(bytes), cipher.final()]);
	return Buffer.concat([iv, cipher.getAuthTag(), sealed]);
}

function open(key: Buffer, aad: string | number, sealed: Uint8Array): Buffer | null {
	if (sealed.length < IV_BYTES + TAG_BYTES) return null;
	const decipher = createDecipheriv('aes-256-gcm', key, sealed.subarray(0, IV_BYTES), {
		authTagLength: TAG_BYTES
	});
	decipher.setAAD(Buffer.from(String(aad)));
	decipher.setAuthTag(sealed.subarray(IV_BYTES, IV_BYTES + TAG_BYTES));
	try {
		const bytes = decipher.update(sealed.subarray(IV_BYTES + TAG_BYTES));
		return Buffer.concat([bytes, decipher.final()]);
	} catch {
		return null;
	}
}
