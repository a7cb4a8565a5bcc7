import { describe, expect, test } from 'vitest';
import { addressBlock, Throttle, type Attempt } from './throttle';

const params = {
	windowMs: 900_000,
	perAddress: 20,
	perPersonAtAddress: 5,
	perPerson: 50,
	perDevice: 10
};
const attempt = (email: string, address: string, deviceId: string | null = null): Attempt => ({
	email,
	address,
	deviceId
});
const fail = (throttle: Throttle, a: Attempt, times: number, atMs = 0) =>
	Array.from({ length: times }, () => throttle.admit(a, atMs).ok);

test('five wrong passwords for one person from one address, and the sixth is refused', () => {
	const throttle = new Throttle(params);
	expect(fail(throttle, attempt('a', '192.0.2.1'), 6)).toEqual([
		true,
		true,
		true,
		true,
		true,
		false
	]);
	expect(throttle.admit(attempt('a', '192.0.2.1'), 899_999)).toEqual({ ok: false, retryAfterS: 1 });
	expect(throttle.admit(attempt('a', '192.0.2.1'), 900_000).ok).toBe(true);
});

test('one address tries twenty times at the most, whatever the names', () => {
	const throttle = new Throttle(params);
	const tries = Array.from({ length: 21 }, (_, i) =>
		throttle.admit(attempt(`p${i}`, '192.0.2.1'), 0)
	);
	expect(tries.filter((t) => t.ok)).toHaveLength(20);
});

test('a success takes its own attempt back', () => {
	const throttle = new Throttle(params);
	for (let i = 0; i < 100; i++) {
		const a = attempt('a', '192.0.2.1');
		expect(throttle.admit(a, i).ok).toBe(true);
		throttle.succeeded(a);
	}
});

test('many at once cannot pass together: each counts before it is tried', () => {
	const throttle = new Throttle(params);
	expect(fail(throttle, attempt('a', '192.0.2.1'), 50).filter((ok) => ok)).toHaveLength(5);
});

describe('nobody is locked out by somebody else', () => {
	test('a flood from many addresses leaves the person free elsewhere', () => {
		const throttle = new Throttle(params);
		for (let i = 0; i < 200; i++) fail(throttle, attempt('a', `198.51.${i}.1`), 5);
		expect(throttle.admit(attempt('a', '192.0.2.77'), 1).ok).toBe(true);
	});

	test('but an address that has failed in that flood gets no second guess', () => {
		const throttle = new Throttle(params);
		for (let i = 0; i < 60; i++) fail(throttle, attempt('a', `198.51.${i}.1`), 1);
		expect(throttle.admit(attempt('a', '198.51.3.1'), 1).ok).toBe(false);
	});

	test('a device that the person signed in on before passes from a flooded address', () => {
		const throttle = new Throttle(params);
		fail(throttle, attempt('a', '192.0.2.1'), 30);
		fail(throttle, attempt('b', '192.0.2.1'), 30);
		expect(throttle.admit(attempt('a', '192.0.2.1', '7.dev'), 1).ok).toBe(true);
		expect(fail(throttle, attempt('a', '192.0.2.1', '7.dev'), 10).at(-1)).toBe(false);
	});
});

// RFC 4291, 2.2 [M]: '::' stands for as many zero groups as are missing.
test.each([
	['192.0.2.1', '192.0.2.1'],
	['::ffff:192.0.2.1', '192.0.2.1'],
	['2001:db8:1:2:3:4:5:6', '2001:db8:1:2::/64'],
	['2001:db8:1:2::9', '2001:db8:1:2::/64'],
	['2001:DB8::9', '2001:db8:0:0::/64'],
	['::1', '0:0:0:0::/64'],
	['2001:0db8:0001:0002::', '2001:db8:1:2::/64']
])('%s is counted as %s', (address, block) => {
	expect(addressBlock(address)).toBe(block);
});
