import { expect, test } from 'vitest';
import { downTopic, isSerial, parseDownTopic, parseUpTopic, upTopic } from './topics';

test.each(['reading', 'pair', 'hello', 'ack', 'gone'] as const)(
	'up/%s is built and read',
	(kind) => {
		const topic = upTopic('NODE-0001', kind);
		expect(topic).toBe(`lodekeep/1/NODE-0001/up/${kind}`);
		expect(parseUpTopic(topic)).toEqual({ serial: 'NODE-0001', kind });
	}
);

test('the down topic is built and read', () => {
	expect(downTopic('NODE-0001')).toBe('lodekeep/1/NODE-0001/down');
	expect(parseDownTopic('lodekeep/1/NODE-0001/down')).toBe('NODE-0001');
});

test.each([
	'lodekeep/2/NODE-0001/up/reading',
	'lodekeep/1/node-0001/up/reading',
	'lodekeep/1/ABC/up/reading',
	`lodekeep/1/${'A'.repeat(33)}/up/reading`,
	'lodekeep/1/NODE-0001/up/other',
	'lodekeep/1/NODE-0001/up/reading/',
	'lodekeep/1/NODE-0001/up/reading\n',
	'/lodekeep/1/NODE-0001/up/reading',
	'lodekeep/1/+/up/reading',
	'lodekeep/1/NODE-0001/down',
	''
])('%j is no up topic', (topic) => {
	expect(parseUpTopic(topic)).toBeNull();
});

test.each([
	['A-Z0', true],
	['NODE-0001', true],
	['A'.repeat(32), true],
	['ABC', false],
	['A'.repeat(33), false],
	['NODE_1', false],
	['NODE-1\n', false]
])('serial %j: %s', (serial, good) => {
	expect(isSerial(serial)).toBe(good);
});
