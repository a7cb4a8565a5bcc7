import { createHash } from 'node:crypto';
import { expect, test } from 'vitest';
import { signIn, type SignInRules } from './authenticate';
import { NodeDirectory } from './directory';

const PASSWORD = 'a password';
const directory = new NodeDirectory(1_000);
const hash = createHash('sha256').update(PASSWORD).digest('hex');
directory.stage([{ serial: 'NODE-0001', hashes: [hash] }], 'only');
directory.vouch(0);
const rules: SignInRules = { directory, linkSecret: 'the link secret', ratePerS: 200 };

type Will = { topic: string; qos: number } | null;
const from = (remoteAddress: string, will: Will = null) =>
	({ will, socket: { remoteAddress } }) as Parameters<typeof signIn>[1];
const asApp = {
	clientId: 'lodekeep-app',
	user: 'lodekeep-app',
	password: Buffer.from('the link secret')
};
const asNode = { clientId: 'NODE-0001', user: 'NODE-0001', password: Buffer.from(PASSWORD) };

test("the app's link is taken from loopback only, whatever the secret", () => {
	for (const address of ['127.0.0.1', '127.8.9.1', '::1', '::ffff:127.0.0.1']) {
		expect(signIn(rules, from(address), asApp, 0)).toEqual({ ok: true, role: { kind: 'app' } });
	}
	for (const address of ['192.0.2.7', '::ffff:192.0.2.7', '2001:db8::1', '::2', '']) {
		expect(signIn(rules, from(address), asApp, 0)).toEqual({ ok: false, code: 5, reason: 'link' });
	}
});

test('a node is let in from anywhere by serial and password', () => {
	const result = signIn(rules, from('192.0.2.7'), asNode, 0);
	expect(result).toMatchObject({ ok: true, role: { kind: 'node', serial: 'NODE-0001', hash } });
});

test('a sign-in without a password or with a foreign will is refused', () => {
	const nobody = { ...asNode, password: undefined };
	expect(signIn(rules, from('192.0.2.7'), nobody, 0)).toMatchObject({ reason: 'credentials' });
	const will = { topic: 'lodekeep/1/NODE-0002/up/gone', qos: 1 };
	expect(signIn(rules, from('192.0.2.7', will), asNode, 0)).toMatchObject({ reason: 'will' });
});
