import { describe, expect, test } from 'vitest';
import type { Writable } from './cbor-write';
import { sealEnvelope } from './envelope';
import { mqttPassword, openUp, sealUp } from './frames';
import { hex, ID, KEY, OPTS, sealed, toHex } from './test-support';
import { upTopic, type UpKind } from './topics';
import type { ReadingFrame } from './types';

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
