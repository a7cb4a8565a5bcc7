import { describe, expect, test } from 'vitest';
import { etagOf, noneMatch } from './etag';

describe('If-None-Match compares weakly (RFC 9110, 8.8.3.2; check-values 9i)', () => {
	// Column 'weak' of the table: a match means that the condition is false.
	test.each([
		['W/"1"', 'W/"1"', true],
		['W/"1"', 'W/"2"', false],
		['W/"1"', '"1"', true],
		['"1"', '"1"', true]
	])('%s and %s', (sent, ours, matches) => {
		expect(noneMatch(sent, ours)).toBe(!matches);
	});

	test('a list matches by any of its tags, a star by being there', () => {
		expect(noneMatch('"a", W/"b" ,"c"', '"b"')).toBe(false);
		expect(noneMatch('"a","c"', '"b"')).toBe(true);
		expect(noneMatch('*', '"b"')).toBe(false);
	});

	test('a list that holds a star among others is no star (invalid by 13.1.2)', () => {
		expect(noneMatch('"a", *', '"b"')).toBe(true);
	});

	test('no header, nothing to compare', () => {
		expect(noneMatch(null, '"b"')).toBe(true);
	});
});

test('a tag is strong and differs by part, media type and coding', () => {
	const tags = [
		etagOf([1, 2], 'application/json', 'identity'),
		etagOf([1, 3], 'application/json', 'identity'),
		etagOf([12], 'application/json', 'identity'),
		etagOf([1, 2], 'application/geo+json', 'identity'),
		etagOf([1, 2], 'application/json', 'gzip'),
		etagOf([1, 2], 'application/json', 'br')
	];
	expect(new Set(tags).size).toBe(tags.length);
	for (const tag of tags) expect(tag).toMatch(/^"[\w-]{22}"$/);
});
