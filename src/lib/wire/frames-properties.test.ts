import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import type { Writable } from './cbor-write';
import { openUp, sealUnsigned, sealUp } from './frames';
import { KEY, OPTS, RANGE, sealed, UNSIGNED } from './test-support';
import { upTopic, type UpKind } from './topics';
import type { Counts3, UpFrame } from './types';

const READING = upTopic('NODE-0001', 'reading');

const uint32 = fc.integer({ min: 0, max: 2 ** 32 - 1 });
const count = fc.integer({ min: RANGE.min, max: RANGE.max });
const counts: fc.Arbitrary<Counts3> = fc.tuple(count, count, count);
const maybe = <T>(arbitrary: fc.Arbitrary<T>) => fc.option(arbitrary, { nil: null });
const int16 = fc.integer({ min: -0x8000, max: 0x7fff });
const common = {
	boot: uint32,
	seq: uint32,
	t: fc.maxSafeNat(),
	sentMs: maybe(fc.maxSafeNat()),
	unsigned: fc.constant(false)
};
const before = maybe(fc.record({ polarity: fc.constantFrom<1 | -1 | 0>(1, -1, 0), counts }));
const pulse = maybe(fc.record({ ageS: uint32, count: uint32 }));
const tx = maybe(fc.record({ frames: uint32, radioMs: uint32 }));
const habit = maybe(fc.record({ periodS: fc.nat(), deltaMg: fc.nat() }));
const electrics = {
	tempDc: maybe(int16),
	batteryMv: maybe(fc.integer({ min: 0, max: 0xffff })),
	rssiDbm: maybe(int16)
};
const id = fc.uint8Array({ minLength: 8, maxLength: 8 });
const text = (max: number) => maybe(fc.string({ unit: 'grapheme-ascii', maxLength: max }));
const rowsOf = fc
	.tuple(fc.boolean(), fc.array(fc.tuple(counts, int16), { minLength: 1, maxLength: 120 }))
	.map(([temps, items]) =>
		items.map(([c, temp], i) => ({ dtMs: i * 250, counts: c, tempDc: temps ? temp : null }))
	);
const anyFrame: fc.Arbitrary<UpFrame> = fc.oneof(
	fc.record({
		kind: fc.constant('reading' as const),
		...common,
		rows: rowsOf,
		polarity: fc.constantFrom<1 | -1>(1, -1),
		...electrics,
		pulse,
		tx
	}),
	fc.record({
		kind: fc.constant('pair' as const),
		...common,
		set: counts,
		reset: counts,
		before,
		after: maybe(counts),
		...electrics,
		commandId: maybe(id),
		pulse
	}),
	fc.record({
		kind: fc.constant('hello' as const),
		...common,
		firmware: text(64),
		profile: text(32),
		cause: text(64),
		...electrics,
		before,
		after: maybe(counts),
		pulse,
		habit,
		tx
	}),
	fc.record({
		kind: fc.constant('ack' as const),
		...common,
		commandId: id,
		outcome: fc.constantFrom<0 | 1 | 2>(0, 1, 2),
		reason: text(200),
		before,
		after: maybe(counts),
		pulse,
		habit,
		rssiDbm: electrics.rssiDbm
	})
);

describe('properties', () => {
	test('what is sealed opens to the same frame', () => {
		fc.assert(
			fc.property(anyFrame, fc.constantFrom<4 | 5>(4, 5), (frame, alg) => {
				const topic = upTopic('NODE-0001', frame.kind);
				const bytes = sealUp(topic, frame, KEY, alg);
				fc.pre(bytes.length <= 4096);
				expect(openUp(topic, bytes, [KEY], OPTS)).toEqual({ ok: true, frame });
			}),
			{ numRuns: 500 }
		);
	});

	test('the JSON twin opens to the same frame', () => {
		fc.assert(
			fc.property(anyFrame, (frame) => {
				const topic = upTopic('NODE-0001', frame.kind);
				const bytes = sealUnsigned(frame);
				fc.pre(bytes.length <= 4096);
				const opened = openUp(topic, bytes, [], UNSIGNED);
				expect(opened).toEqual({ ok: true, frame: { ...frame, unsigned: true } });
			}),
			{ numRuns: 300 }
		);
	});

	test('random bytes never throw and never open', () => {
		fc.assert(
			fc.property(fc.uint8Array({ maxLength: 300 }), fc.boolean(), (bytes, braced) => {
				if (braced && bytes.length > 0) bytes[0] = 0x7b;
				expect(openUp(READING, bytes, [KEY], UNSIGNED).ok).toBe(false);
			}),
			{ numRuns: 3000 }
		);
	});

	test('a changed byte never throws and never opens to something else', () => {
		const flip = fc.tuple(fc.nat(), fc.integer({ min: 1, max: 255 }));
		fc.assert(
			fc.property(anyFrame, flip, (frame, [at, mask]) => {
				const topic = upTopic('NODE-0001', frame.kind);
				const bytes = sealUp(topic, frame, KEY, 5);
				const index = at % bytes.length;
				bytes[index] = (bytes[index] as number) ^ mask;
				expect(openUp(topic, bytes, [KEY], OPTS).ok).toBe(false);
			}),
			{ numRuns: 500 }
		);
	});

	test('whatever a key holder signs, the opener answers and does not throw', () => {
		const value = fc.letrec<{ v: Writable }>((tie) => ({
			v: fc.oneof(
				{ maxDepth: 3 },
				fc.maxSafeInteger(),
				fc.string(),
				fc.uint8Array({ maxLength: 9 }),
				fc.array(tie('v'), { maxLength: 5 })
			)
		})).v;
		const fields = fc.dictionary(fc.integer({ min: 1, max: 27 }).map(String), value);
		fc.assert(
			fc.property(
				fields,
				fc.constantFrom<UpKind>('reading', 'pair', 'hello', 'ack'),
				(map, kind) => {
					const topic = upTopic('NODE-0001', kind);
					const entries = Object.entries(map).map(([k, v]): [number, Writable] => [Number(k), v]);
					expect(openUp(topic, sealed(topic, entries), [KEY], OPTS)).toHaveProperty('ok');
				}
			),
			{ numRuns: 2000 }
		);
	});
});
