import { brotliDecompressSync, gunzipSync } from 'node:zlib';
import { expect, test } from 'vitest';
import { CodedCache, compress } from './compress';

const text = Buffer.from('{"state":"vacant"},'.repeat(200));

test('each coding is undone by zlib', async () => {
	expect(gunzipSync(await compress(text, 'gzip'))).toEqual(text);
	expect(brotliDecompressSync(await compress(text, 'br'))).toEqual(text);
	expect(await compress(text, 'identity')).toBe(text);
});

test('the cache stays within its bytes and drops what was not asked for longest', () => {
	const cache = new CodedCache(100);
	for (const name of ['a', 'b', 'c', 'd']) cache.set(name, Buffer.alloc(25));
	cache.get('a');
	cache.set('e', Buffer.alloc(25));
	expect(cache.get('b')).toBeUndefined();
	expect(cache.get('a')).toBeDefined();
	expect(cache.bytes).toBe(100);
});

test('one answer never fills the cache alone', () => {
	const cache = new CodedCache(100);
	cache.set('a', Buffer.alloc(26));
	expect(cache.get('a')).toBeUndefined();
});
