import { decode } from 'cborg';
import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { Malformed, readWhole, type CborValue } from './cbor-read';
import { writeCbor, type Writable } from './cbor-write';
import { hex, toHex } from './test-support';

// Source: RFC 8949, Appendix A (check-values.md 9g).
const TAKEN: [string, CborValue][] = [
	['00', 0],
	['0a', 10],
	['17', 23],
	['1818', 24],
	['1864', 100],
	['1903e8', 1000],
	['1a000f4240', 1_000_000],
	['1b000000e8d4a51000', 1_000_000_000_000],
	['1bffffffffffffffff', 18446744073709551615n],
	['20', -1],
	['29', -10],
	['3863', -100],
	['3903e7', -1000],
	['3bffffffffffffffff', -18446744073709551616n],
	['f4', false],
	['f5', true],
	['f6', null],
	['f7', undefined],
	['4401020304', Uint8Array.of(1, 2, 3, 4)],
	['6449455446', 'IETF'],
	['62c3bc', 'ü'],
	['80', []],
	['83010203', [1, 2, 3]],
	['8301820203820405', [1, [2, 3], [4, 5]]],
	['a0', new Map()],
	[
		'a201020304',
		new Map([
			[1, 2],
			[3, 4]
		])
	],
	[
		'a26161016162820203',
		new Map<string, CborValue>([
			['a', 1],
			['b', [2, 3]]
		])
	]
];

/** The rest of Appendix A: floats, simple values, tags, indefinite lengths (protocol, 'Envelope'). */
const REFUSED =
	'f90000 f98000 f93c00 fb3ff199999999999a f93e00 f97bff fa47c35000 fa7f7fffff fb7e37e43c8800759c f90001 f90400 f9c400 fbc010666666666666 f97c00 f97e00 f0 f8ff c074323031332d30332d32315432303a30343a30305a c11a514b67b0 c1fb41d452d9ec200000 5f42010243030405ff 7f657374726561646d696e67ff bf6346756ef563416d7421ff'.split(
		' '
	);

describe('the strict CBOR reader', () => {
	test.each(TAKEN)('%s is read', (bytes, value) => {
		expect(readWhole(hex(bytes))).toEqual(value);
	});

	test.each(REFUSED)('%s, which the protocol does not allow, is refused', (bytes) => {
		expect(() => readWhole(hex(bytes))).toThrow(Malformed);
	});

	test.each([
		['', 'nothing'],
		['0000', 'bytes left over'],
		['18', 'a head cut off'],
		['1b00', 'a long head cut off'],
		['1c', 'a reserved head'],
		['43aabb', 'a byte string cut off'],
		['5b7fffffffffffffff', 'an absurd length'],
		['9b0000ffffffffffff', 'an absurd array'],
		['61ff', 'text that is not UTF-8'],
		['a20102 0103'.replace(' ', ''), 'a duplicate key'],
		['a2010218010 3'.replace(' ', ''), 'a duplicate key in another length'],
		['a2616101616102', 'a duplicate text key'],
		['a1410102', 'a byte string as key'],
		['a1f402', 'false as key'],
		['f818', 'a two-byte simple value under 32'],
		['ff', 'a break alone'],
		['81'.repeat(40) + '80', 'deep nesting']
	])('%s (%s) is refused', (bytes) => {
		expect(() => readWhole(hex(bytes))).toThrow(Malformed);
	});

	test('no bytes make it throw anything but Malformed', () => {
		fc.assert(
			fc.property(fc.uint8Array({ maxLength: 80 }), (bytes) => {
				try {
					readWhole(bytes);
				} catch (error) {
					expect(error).toBeInstanceOf(Malformed);
				}
			}),
			{ numRuns: 5000 }
		);
	});
});

const integers = fc.oneof(
	fc.maxSafeInteger(),
	fc.integer({ min: -300, max: 300 }),
	fc.integer({ min: 0, max: 2 ** 32 })
);
const writable: fc.Arbitrary<Writable> = fc.letrec<{ item: Writable }>((tie) => ({
	item: fc.oneof(
		{ depthSize: 'small', maxDepth: 4 },
		integers,
		fc.string({ unit: 'grapheme' }),
		fc.uint8Array({ maxLength: 300 }),
		fc.array(tie('item'), { maxLength: 5 }),
		fc
			.uniqueArray(fc.tuple(integers, tie('item')), { maxLength: 5, selector: ([key]) => key })
			.map((entries) => new Map(entries))
	)
})).item;

describe('the writer', () => {
	test('what it writes is read back', () => {
		fc.assert(
			fc.property(writable, (value) => {
				expect(readWhole(writeCbor(value))).toEqual(value);
			})
		);
	});

	test('cborg, written apart from us, reads the same', () => {
		fc.assert(
			fc.property(writable, (value) => {
				const bytes = Buffer.from(writeCbor(value));
				const theirs = decode(bytes, { useMaps: true }) as unknown;
				expect(toHex(writeCbor(plain(theirs)))).toBe(toHex(bytes));
			})
		);
	});

	test.each(TAKEN.filter(([, value]) => isWritable(value)))('%s is written so', (bytes, value) => {
		expect(toHex(writeCbor(value as Writable))).toBe(bytes);
	});

	test('a fraction is a bug of the caller', () => {
		expect(() => writeCbor(0.5)).toThrow(TypeError);
	});
});

function isWritable(value: CborValue): boolean {
	return value !== null && value !== undefined && !['bigint', 'boolean'].includes(typeof value);
}

/** cborg may give views of the input for byte strings. */
function plain(value: unknown): Writable {
	if (value instanceof Uint8Array) return Uint8Array.from(value);
	if (Array.isArray(value)) return value.map(plain);
	if (value instanceof Map)
		return new Map([...(value as Map<number, unknown>)].map(([k, v]) => [k, plain(v)]));
	return value as number | string;
}
