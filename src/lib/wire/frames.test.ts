import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { writeCbor, type Writable } from './cbor-write';
import { sealEnvelope } from './envelope';
import { mqttPassword, openCommand, openUp, sealCommand, sealUnsigned, sealUp } from './frames';
import { hex, toHex } from './test-support';
import { downTopic, upTopic, type UpKind } from './topics';
import type { CommandFrame, Counts3, ReadingFrame, UpFrame } from './types';

const KEY = Uint8Array.from({ length: 32 }, (_, i) => i);
const RANGE = { min: -131_072, max: 131_071 };
const OPTS = { unsignedAllowed: false, rangeCounts: RANGE };
const UNSIGNED = { unsignedAllowed: true, rangeCounts: RANGE };
const READING = upTopic('NODE-0001', 'reading');

// Source: protocol.md, 'Test vector', computed by an encoder written apart from this project.
const VECTOR: ReadingFrame = {
	kind: 'reading',
	boot: 7,
	seq: 42,
	t: 1_700_000_000_000,
	sentMs: null,
	unsigned: false,
	rows: [{ dtMs: 0, counts: [1234, -2345, 3456], tempDc: null }],
	polarity: 1,
	tempDc: 215,
	batteryMv: 3600,
	rssiDbm: null,
	pulse: null,
	tx: null
};
const PAYLOAD = 'a7010702182a031b0000018bcfe56800048184001904d2390928190d8005010618d707190e10';
const VECTOR_5 = `8443a10105a05826${PAYLOAD}582049f75483bfefffc25dc10138f35b0b49f4ff455ddde1f37b0dbce0282dfcc1a0`;
const VECTOR_4 = `8443a10104a05826${PAYLOAD}48ebf94af407afda60`;

describe('the test vector of protocol.md', () => {
	test.each([
		[5, VECTOR_5, 80],
		[4, VECTOR_4, 55]
	] as const)('algorithm %i, byte for byte', (alg, message, length) => {
		const sealed = sealUp(READING, VECTOR, KEY, alg);
		expect(toHex(sealed)).toBe(message);
		expect(sealed).toHaveLength(length);
		expect(openUp(READING, hex(message), [KEY], OPTS)).toEqual({ ok: true, frame: VECTOR });
	});

	test('the MQTT password', () => {
		expect(mqttPassword(KEY)).toBe(
			'3498d033a6b45a25fe69931b400415720e4b621acb9f061b306fa083cd8677df'
		);
	});

	test('the topic is under the tag: the same bytes on another topic are refused', () => {
		const elsewhere = upTopic('NODE-0002', 'reading');
		expect(openUp(elsewhere, hex(VECTOR_5), [KEY], OPTS)).toMatchObject({ reason: 'bad_tag' });
	});

	test('any of two keys opens it, none refuses it', () => {
		const other = new Uint8Array(32);
		expect(openUp(READING, hex(VECTOR_5), [other, KEY], OPTS).ok).toBe(true);
		expect(openUp(READING, hex(VECTOR_5), [other], OPTS)).toMatchObject({ reason: 'bad_tag' });
		expect(openUp(READING, hex(VECTOR_5), [], OPTS)).toMatchObject({ reason: 'bad_tag' });
	});
});

/** Seals any payload, to try what an honest encoder would not write. */
const sealed = (topic: string, fields: [number | string, Writable][]): Uint8Array =>
	sealEnvelope(topic, writeCbor(new Map(fields)), KEY, 5);
const COMMON: [number, Writable][] = [
	[1, 7],
	[2, 42],
	[3, 1_700_000_000_000]
];
const ROW: [number, Writable] = [4, [[0, 1, 2, 3]]];

function outcome(kind: UpKind, fields: [number | string, Writable][]): string {
	const topic = upTopic('NODE-0001', kind);
	const opened = openUp(topic, sealed(topic, fields), [KEY], OPTS);
	return opened.ok ? 'ok' : opened.reason;
}

const rows = (n: number): Writable => Array.from({ length: n }, (_, i) => [i, 1, 2, 3]);
const with4 = (value: Writable): [number, Writable][] => [...COMMON, [4, value]];
const plus = (key: number, value: Writable): [number, Writable][] => [...COMMON, ROW, [key, value]];

describe('the table of protocol.md, key by key: readings', () => {
	test.each<[string, [number | string, Writable][], string]>([
		['the least reading', [...COMMON, ROW], 'ok'],
		['no boot', [[2, 1], [3, 0], ROW], 'wrong_type'],
		['no seq', [[1, 1], [3, 0], ROW], 'wrong_type'],
		['no t', [[1, 1], [2, 0], ROW], 'wrong_type'],
		['no rows', COMMON, 'wrong_type'],
		['boot at its top', [[1, 2 ** 32 - 1], [2, 0], [3, 0], ROW], 'ok'],
		['boot over uint32', [[1, 2 ** 32], [2, 0], [3, 0], ROW], 'out_of_range'],
		['boot below 0', [[1, -1], [2, 0], [3, 0], ROW], 'out_of_range'],
		['boot as text', [[1, '7'], [2, 0], [3, 0], ROW], 'wrong_type'],
		['seq over uint32', [[1, 1], [2, 2 ** 32], [3, 0], ROW], 'out_of_range'],
		['t without clock', [[1, 1], [2, 0], [3, 0], ROW], 'ok'],
		['t at 2^53 - 1', [[1, 1], [2, 0], [3, 2 ** 53 - 1], ROW], 'ok'],
		['t below 0', [[1, 1], [2, 0], [3, -1], ROW], 'out_of_range'],
		['rows empty', with4([]), 'wrong_type'],
		['120 rows', with4(rows(120)), 'ok'],
		['121 rows', with4(rows(121)), 'too_many_rows'],
		['rows no array', with4(3), 'wrong_type'],
		['a row of 3', with4([[0, 1, 2]]), 'wrong_type'],
		['a row of 5', with4([[0, 1, 2, 3, 4]]), 'wrong_type'],
		['a row no array', with4([1]), 'wrong_type'],
		['dt below 0', with4([[-1, 1, 2, 3]]), 'out_of_range'],
		['dt of a day', with4([[86_400_000, 1, 2, 3]]), 'ok'],
		['dt over a day', with4([[86_400_001, 1, 2, 3]]), 'out_of_range'],
		[
			'dt that does not rise',
			with4([
				[5, 1, 2, 3],
				[5, 1, 2, 3]
			]),
			'out_of_range'
		],
		['counts at both ends', with4([[0, -131_072, 131_071, 0]]), 'ok'],
		['counts over the range', with4([[0, 0, 131_072, 0]]), 'out_of_range'],
		['counts under the range', with4([[0, 0, 0, -131_073]]), 'out_of_range'],
		['polarity -1', plus(5, -1), 'ok'],
		['polarity 0', plus(5, 0), 'out_of_range'],
		['polarity 2', plus(5, 2), 'out_of_range'],
		['temp below 0', plus(6, -400), 'ok'],
		['temp over a column', plus(6, 40_000), 'out_of_range'],
		['temp as text', plus(6, '21'), 'wrong_type'],
		['battery below 0', plus(7, -1), 'out_of_range'],
		['rssi', plus(8, -97), 'ok'],
		['pulse', plus(22, [10, 3]), 'ok'],
		['pulse of three', plus(22, [10, 3, 1]), 'wrong_type'],
		['pulse below 0', plus(22, [-1, 3]), 'out_of_range'],
		['sent', plus(23, 1_700_000_000_100), 'ok'],
		['sent below 0', plus(23, -1), 'out_of_range'],
		['temps, one a row', plus(24, [211]), 'ok'],
		['temps, too many', plus(24, [211, 212]), 'wrong_type'],
		['temps as text', plus(24, ['x']), 'wrong_type'],
		['tx', plus(26, [100, 5000]), 'ok'],
		['tx no array', plus(26, 5), 'wrong_type'],
		['a key that a later firmware adds', plus(99, 'new'), 'ok'],
		['a negative key', plus(-5, 1), 'ok'],
		['a key of another kind of message, whatever it holds', plus(15, 'x'), 'ok'],
		['a text key', [...COMMON, ROW, ['boot', 1]], 'wrong_type']
	])('%s', (_title, fields, expected) => {
		expect(outcome('reading', fields)).toBe(expected);
	});

	test('rows get their own temperatures', () => {
		const opened = openUp(READING, sealed(READING, plus(24, [-35])), [KEY], OPTS);
		expect(opened).toMatchObject({ ok: true, frame: { rows: [{ tempDc: -35 }], tempDc: null } });
	});

	test('what is absent is null, and polarity is after SET', () => {
		const opened = openUp(READING, sealed(READING, [...COMMON, ROW]), [KEY], OPTS);
		expect(opened).toMatchObject({
			ok: true,
			frame: { polarity: 1, tempDc: null, batteryMv: null, rssiDbm: null, pulse: null, tx: null }
		});
	});
});

const PAIR: [number, Writable][] = [...COMMON, [9, [1, 2, 3]], [10, [4, 5, 6]]];
const ID = Uint8Array.of(1, 2, 3, 4, 5, 6, 7, 8);
const HABIT = new Map([
	['period_s', 60],
	['delta_mg', 8]
]);

describe('the table of protocol.md, key by key: pair, hello, ack', () => {
	test.each<[UpKind, string, [number, Writable][], string]>([
		['pair', 'the least', PAIR, 'ok'],
		['pair', 'no reset', PAIR.slice(0, 4), 'wrong_type'],
		['pair', 'set of two', [...COMMON, [9, [1, 2]], [10, [4, 5, 6]]], 'wrong_type'],
		['pair', 'set over the range', [...COMMON, [9, [1, 2, 2e5]], [10, [4, 5, 6]]], 'out_of_range'],
		['pair', 'before', [...PAIR, [20, [-1, 1, 2, 3]]], 'ok'],
		['pair', 'before, polarity not known', [...PAIR, [20, [0, 1, 2, 3]]], 'ok'],
		['pair', 'before, polarity 2', [...PAIR, [20, [2, 1, 2, 3]]], 'out_of_range'],
		['pair', 'before of three', [...PAIR, [20, [1, 2, 3]]], 'wrong_type'],
		['pair', 'after over the range', [...PAIR, [21, [0, 0, -2e5]]], 'out_of_range'],
		['pair', 'command', [...PAIR, [11, ID]], 'ok'],
		['pair', 'command of 7 bytes', [...PAIR, [11, ID.subarray(1)]], 'wrong_type'],
		['pair', 'command as text', [...PAIR, [11, '0102030405060708']], 'wrong_type'],
		['hello', 'the least', COMMON, 'ok'],
		['hello', 'texts', [...COMMON, [12, '1.4.0'], [13, 'amr-18-16384'], [14, 'power-on']], 'ok'],
		['hello', 'firmware as number', [...COMMON, [12, 14]], 'wrong_type'],
		['hello', 'habit', [...COMMON, [25, HABIT]], 'ok'],
		['hello', 'habit half', [...COMMON, [25, new Map([['period_s', 60]])]], 'wrong_type'],
		['hello', 'habit no map', [...COMMON, [25, [60, 8]]], 'wrong_type'],
		['ack', 'the least', [...COMMON, [11, ID], [15, 0]], 'ok'],
		['ack', 'no command', [...COMMON, [15, 0]], 'wrong_type'],
		['ack', 'no outcome', [...COMMON, [11, ID]], 'wrong_type'],
		['ack', 'outcome 3', [...COMMON, [11, ID], [15, 3]], 'out_of_range'],
		['ack', 'reason as number', [...COMMON, [11, ID], [15, 1], [16, 5]], 'wrong_type'],
		['gone', 'has no frame', COMMON, 'bad_topic']
	])('%s: %s', (kind, _title, fields, expected) => {
		expect(outcome(kind, fields)).toBe(expected);
	});

	test('a text longer than is kept is cut between characters and does not cost the message', () => {
		const topic = upTopic('NODE-0001', 'hello');
		const opened = openUp(topic, sealed(topic, [...COMMON, [12, '🧭'.repeat(70)]]), [KEY], OPTS);
		expect(opened).toMatchObject({ ok: true, frame: { firmware: '🧭'.repeat(64) } });
	});
});

describe('refusals of whole messages', () => {
	test('4,096 bytes are taken and 4,097 are too large', () => {
		const pad = (n: number) => sealed(READING, [...COMMON, ROW, [99, new Uint8Array(n)]]);
		const over = 4097 - pad(3000).length + 3000;
		expect(pad(over)).toHaveLength(4097);
		expect(openUp(READING, pad(over - 1), [KEY], OPTS).ok).toBe(true);
		expect(openUp(READING, pad(over), [KEY], OPTS)).toMatchObject({ reason: 'too_large' });
	});

	test.each([
		['a float', 'a4010102010300 04818400f900000000'.replaceAll(' ', '')],
		['a tag', 'a401010201030004c18184 00010203'.replaceAll(' ', '')],
		['a duplicate key', 'a5010101010201030004818400010203'],
		['an indefinite array', 'a4010102010300049f8400010203ff'],
		['bytes left over', 'a401010201030004818400010203 00'.replaceAll(' ', '')]
	])('a payload with %s is not decodable', (_title, payload) => {
		const message = sealEnvelope(READING, hex(payload), KEY, 5);
		expect(openUp(READING, message, [KEY], OPTS)).toMatchObject({ reason: 'not_decodable' });
	});

	test('a payload that is no map is a wrong type', () => {
		const message = sealEnvelope(READING, hex('83010203'), KEY, 5);
		expect(openUp(READING, message, [KEY], OPTS)).toMatchObject({ reason: 'wrong_type' });
	});

	test('a topic that is none is refused', () => {
		expect(openUp('elsewhere', hex(VECTOR_5), [KEY], OPTS)).toMatchObject({ reason: 'bad_topic' });
	});

	test('nothing at all is not decodable', () => {
		expect(openUp(READING, new Uint8Array(0), [KEY], OPTS)).toMatchObject({
			reason: 'not_decodable'
		});
	});
});

const json = (value: unknown): Uint8Array => new TextEncoder().encode(JSON.stringify(value));
const JSON_READING = { boot: 1, seq: 2, t: 0, rows: [[0, 10, -20, 30]], temp: 215 };

describe('the JSON twin', () => {
	test('is refused unless the node may send unsigned', () => {
		const opened = openUp(READING, json(JSON_READING), [KEY], OPTS);
		expect(opened).toMatchObject({ reason: 'unsigned_not_allowed' });
	});

	test('is read with the same names and marked unsigned', () => {
		expect(openUp(READING, json(JSON_READING), [], UNSIGNED)).toMatchObject({
			ok: true,
			frame: {
				kind: 'reading',
				unsigned: true,
				rows: [{ dtMs: 0, counts: [10, -20, 30] }],
				tempDc: 215
			}
		});
	});

	test.each<[string, unknown, string]>([
		['a fraction', { ...JSON_READING, temp: 21.5 }, 'wrong_type'],
		['a number as text', { ...JSON_READING, boot: '1' }, 'wrong_type'],
		['null', { ...JSON_READING, battery: null }, 'wrong_type'],
		['counts over the range', { ...JSON_READING, rows: [[0, 2e5, 0, 0]] }, 'out_of_range'],
		['a name that is not known', { ...JSON_READING, colour: 'red', __proto__: 1 }, 'ok'],
		['an id that is no hex', { ...JSON_READING, command: 'xyz' }, 'wrong_type']
	])('%s', (_title, message, expected) => {
		const opened = openUp(READING, json(message), [], UNSIGNED);
		expect(opened.ok ? 'ok' : opened.reason).toBe(expected);
	});

	test('half a message is not decodable', () => {
		const cut = json(JSON_READING).subarray(0, 20);
		expect(openUp(READING, cut, [], UNSIGNED)).toMatchObject({ reason: 'not_decodable' });
	});

	test('over 4,096 bytes is too large', () => {
		const message = json({ ...JSON_READING, note: 'x'.repeat(4096) });
		expect(openUp(READING, message, [], UNSIGNED)).toMatchObject({ reason: 'too_large' });
	});
});

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

const DOWN = downTopic('NODE-0001');
const COMMAND: CommandFrame = {
	id: ID,
	verb: 'pair',
	boot: 7,
	t: 1_700_000_000_000,
	expiresMs: 1_700_000_600_000,
	report: null
};

describe('commands', () => {
	test.each<CommandFrame>([
		COMMAND,
		{ ...COMMAND, verb: 'set' },
		{ ...COMMAND, verb: 'reset' },
		{ ...COMMAND, verb: 'report', report: { periodS: 2, deltaMg: 8 } }
	])('$verb is sealed and opened', (command) => {
		const opened = openCommand(DOWN, sealCommand(DOWN, command, KEY), KEY);
		expect(opened).toEqual({ ok: true, frame: command });
	});

	test('a command for another node does not open', () => {
		const bytes = sealCommand(DOWN, COMMAND, KEY);
		expect(openCommand(downTopic('NODE-0002'), bytes, KEY)).toMatchObject({ reason: 'bad_tag' });
	});

	test('an up topic takes no command', () => {
		expect(openCommand(READING, sealCommand(DOWN, COMMAND, KEY), KEY)).toMatchObject({
			reason: 'bad_topic'
		});
	});

	const base: [number, Writable][] = [
		[1, 7],
		[3, 5],
		[11, ID],
		[19, 9]
	];
	test.each<[string, [number, Writable][]]>([
		['a verb that is not known', [...base, [17, 'dance']]],
		['a report without args', [...base, [17, 'report']]],
		['no id', [base[0]!, base[1]!, base[3]!, [17, 'set']]],
		['no expiry', [base[0]!, base[1]!, base[2]!, [17, 'set']]]
	])('%s is refused', (_title, fields) => {
		expect(openCommand(DOWN, sealed(DOWN, fields), KEY)).toMatchObject({ reason: 'wrong_type' });
	});
});
