import { expect, test } from 'vitest';
import { bearerOf, hashSecret, keyText, newKeyParts, parseKey, sameHash } from './api-key';

test('a new key reads back as its parts', () => {
	const parts = newKeyParts();
	expect(parseKey(keyText(parts))).toEqual(parts);
	expect(keyText(parts)).toMatch(/^lodekeep_[0-9a-f]{12}_[0-9a-f]{64}$/);
});

test.each(['', 'lodekeep_x_y', 'lodekeep_0123456789ab_', ' lodekeep_0123456789ab_00'])(
	'%j is no key',
	(text) => {
		expect(parseKey(text)).toBeNull();
	}
);

test('SHA-256 of "abc" is the one of FIPS 180-4', () => {
	expect(hashSecret('abc').toString('hex')).toBe(
		'ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad'
	);
	expect(sameHash(hashSecret('abc'), hashSecret('abd'))).toBe(false);
});

test('only the Bearer scheme names a key', () => {
	expect(bearerOf('Bearer abc')).toBe('abc');
	expect(bearerOf('bearer   abc ')).toBe('abc');
	expect(bearerOf('Basic abc')).toBeNull();
	expect(bearerOf('Bearer a b')).toBeNull();
	expect(bearerOf(null)).toBeNull();
});
