import { expect, test } from 'vitest';
import { codingFor, mediaFor } from './negotiate';

// Expected by RFC 9110, 12.5.1 and 12.5.3 [M]: weights, q=0 forbids, identity unless forbidden.
test.each([
	[null, 'identity'],
	['', 'identity'],
	['gzip', 'gzip'],
	['gzip, deflate, br, zstd', 'br'],
	['br;q=0.5, gzip;q=0.8', 'gzip'],
	['br;q=0, gzip', 'gzip'],
	['gzip;q=0, br;q=0', 'identity'],
	['*', 'br'],
	['*;q=0', 'identity'],
	['identity;q=1, gzip;q=0.5', 'identity'],
	['x-gzip', 'gzip'],
	['GZIP;Q=1', 'gzip'],
	['gzip;q=nonsense', 'identity']
])('Accept-Encoding: %s is answered by %s', (header, coding) => {
	expect(codingFor(header)).toBe(coding);
});

test.each([
	[null, 'application/json'],
	['*/*', 'application/json'],
	['application/geo+json', 'application/geo+json'],
	['application/json, application/geo+json;q=0.9', 'application/json'],
	['application/geo+json, application/json;q=0.9', 'application/geo+json'],
	['application/geo+json;q=0', 'application/json'],
	['text/html', 'application/json']
])('Accept: %s is answered by %s', (header, media) => {
	expect(mediaFor(header)).toBe(media);
});
