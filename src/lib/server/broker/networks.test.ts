import { expect, test } from 'vitest';
import { Networks, networkOf } from './networks';

/* Addresses for documentation: RFC 5737 (192.0.2.0/24, 198.51.100.0/24) and RFC 3849 (2001:db8::/32). */
test('IPv4 stands as it is, also mapped into IPv6', () => {
	expect(networkOf('192.0.2.7')).toBe('192.0.2.7');
	expect(networkOf('::ffff:192.0.2.7')).toBe('192.0.2.7');
});
test('hosts of one IPv6 link are one network, whatever way the address is shortened', () => {
	expect(networkOf('2001:db8:0:1::7')).toBe('2001:db8:0:1::/64');
	expect(networkOf('2001:db8:0:1:8:9:a:b')).toBe('2001:db8:0:1::/64');
	expect(networkOf('2001:db8::1:0:0:7')).toBe('2001:db8:0:0::/64');
	expect(networkOf('fe80::1%eth0')).toBe('fe80:0:0:0::/64');
});
test('loopback says nothing of where a node is', () => {
	for (const address of ['127.0.0.1', '::1', '::ffff:127.0.0.1', '', undefined])
		expect(networkOf(address)).toBeNull();
});
test('what changed is told once, and all of it to a new session', () => {
	const networks = new Networks();
	networks.note('A-1', '192.0.2.7');
	networks.note('A-1', '192.0.2.7');
	networks.note('A-2', '192.0.2.7');
	networks.note('A-3', '127.0.0.1');
	expect(networks.take(1)).toEqual([['A-1', '192.0.2.7']]);
	expect(networks.take(9)).toEqual([['A-2', '192.0.2.7']]);
	expect(networks.take(9)).toEqual([]);
	networks.note('A-1', '198.51.100.4');
	expect(networks.take(9)).toEqual([['A-1', '198.51.100.4']]);
	networks.tellAll();
	expect(networks.take(9)).toHaveLength(2);
});
