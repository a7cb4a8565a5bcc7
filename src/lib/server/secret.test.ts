import { createDecipheriv, createHmac } from 'node:crypto';
import { expect, test } from 'vitest';
import { createSecret } from './secret';

const secret = createSecret('s'.repeat(32));
const key = Buffer.from('000102030405060708090a0b0c0d0e0f', 'hex');

test('what was sealed opens for the same purpose and node, and for no other', () => {
	const sealed = secret.seal('node key', 7, key);
	expect(secret.open('node key', 7, sealed)).toEqual({ ok: true, bytes: key, previous: false });
	expect(secret.open('node key', 8, sealed).ok).toBe(false);
	expect(secret.open('outbox', 7, sealed).ok).toBe(false);
	expect(createSecret('t'.repeat(32)).open('node key', 7, sealed).ok).toBe(false);
});

test('each bit that is altered, and each byte cut off, is found out', () => {
	const sealed = secret.seal('node key', 7, key);
	for (let at = 0; at < sealed.length; at += 1) {
		const altered = Buffer.from(sealed);
		altered[at] = (altered[at] ?? 0) ^ 1;
		expect(secret.open('node key', 7, altered).ok).toBe(false);
		expect(secret.open('node key', 7, sealed.subarray(0, at)).ok).toBe(false);
	}
});

test('what the former secret sealed opens while it is the previous one, and says so', () => {
	const sealed = secret.seal('node key', 7, key);
	const now = createSecret('n'.repeat(32), 's'.repeat(32));
	expect(now.open('node key', 7, sealed)).toEqual({ ok: true, bytes: key, previous: true });
	expect(now.open('node key', 7, now.seal('node key', 7, key))).toMatchObject({ previous: false });
});

test('the same bytes are never sealed alike', () => {
	expect(secret.seal('check', 'x', key).equals(secret.seal('check', 'x', key))).toBe(false);
});

/** HKDF written out from RFC 5869, section 2, with Node's HMAC: an independent way to the same key. */
function hkdfByHand(ikm: string, salt: string, info: string): Buffer {
	const prk = createHmac('sha256', salt).update(ikm).digest();
	return createHmac('sha256', prk)
		.update(Buffer.concat([Buffer.from(info), Buffer.from([1])]))
		.digest();
}

test('keys are HKDF-SHA-256 (RFC 5869) and the layout is iv 12, tag 16, cipher', () => {
	const byHand = hkdfByHand('s'.repeat(32), 'lodekeep 1', 'node key');
	expect(secret.derive('node key').equals(byHand)).toBe(true);
	const sealed = secret.seal('node key', 7, key);
	const decipher = createDecipheriv('aes-256-gcm', byHand, sealed.subarray(0, 12));
	decipher.setAAD(Buffer.from('7'));
	decipher.setAuthTag(sealed.subarray(12, 28));
	const opened = Buffer.concat([decipher.update(sealed.subarray(28)), decipher.final()]);
	expect(opened.equals(key)).toBe(true);
});
