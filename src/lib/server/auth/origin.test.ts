import { expect, test } from 'vitest';
import { forgedRequest } from './origin';

const ours = 'https://parking.example';
const request = (over: Partial<Parameters<typeof forgedRequest>[0]>) =>
	forgedRequest({ method: 'POST', origin: ours, ours, hasSession: true, program: false, ...over });

test('our own pages pass', () => {
	expect(request({})).toBe(false);
});

test.each([
	'https://other.example',
	'http://parking.example',
	'https://parking.example:8443',
	'null'
])('%s is another origin', (origin) => {
	expect(request({ origin })).toBe(true);
	expect(request({ origin, hasSession: false })).toBe(true);
});

test('with a session an Origin must be there, whatever the method', () => {
	for (const method of ['POST', 'PUT', 'PATCH', 'DELETE', 'PROPFIND']) {
		expect(request({ method, origin: null })).toBe(true);
	}
	expect(request({ origin: null, hasSession: false })).toBe(false);
});

test('reading changes nothing and passes', () => {
	for (const method of ['GET', 'HEAD', 'OPTIONS']) {
		expect(request({ method, origin: 'https://other.example' })).toBe(false);
	}
});

test('a program with a key is exempt: its cookies are not looked at', () => {
	expect(request({ origin: 'https://other.example', program: true })).toBe(false);
});
