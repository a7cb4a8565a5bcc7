import { expect, test } from 'vitest';
import { decodeCursor, encodeCursor, fixedCursor } from './cursor';

test('a cursor comes back as it was given', () => {
	const value = { after: 12, changes: 345 };
	expect(decodeCursor(fixedCursor, encodeCursor(value))).toEqual(value);
});

test.each(['', 'x', '!!!', encodeCursor({ after: 'DROP' }), encodeCursor([1]), encodeCursor({})])(
	'%j is none of ours',
	(text) => {
		expect(decodeCursor(fixedCursor, text)).toBeNull();
	}
);
