import { describe, expect, test } from 'vitest';
import { openUp } from './frames';
import { KEY, OPTS, UNSIGNED } from './test-support';
import { upTopic } from './topics';

const READING = upTopic('NODE-0001', 'reading');

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
