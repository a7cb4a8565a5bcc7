import fc from 'fast-check';
import { expect, test } from 'vitest';
import { pack, unpack } from './pack';

const plain = fc.letrec((tie) => ({
	value: fc.oneof(
		fc.constant(null),
		fc.boolean(),
		fc.double({ noNaN: true }),
		fc.float({ noNaN: true }),
		fc.integer(),
		fc.integer({ min: 0, max: 2 ** 47 }),
		fc.string(),
		fc.array(tie('value'), { maxLength: 4 }),
		fc.dictionary(fc.constantFrom('atMs', 'j', 'a key of no dictionary'), tie('value'), {
			noNullPrototype: true
		})
	)
})).value;

test('what is packed comes back bit for bit', () => {
	fc.assert(
		fc.property(plain, (value) => {
			expect(unpack(pack(value))).toStrictEqual(value);
		})
	);
});

test('an instant takes 7 bytes, a float of detection 5, a known key 1', () => {
	expect(pack(1_795_593_001_923).length).toBe(7);
	expect(pack(Math.fround(12.3)).length).toBe(5);
	expect(pack({ atMs: 0 }).length).toBe(2 + 1 + 2);
});
