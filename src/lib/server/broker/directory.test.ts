import { createHash } from 'node:crypto';
import { expect, test } from 'vitest';
import { NodeDirectory, sameSecret } from './directory';

// protocol.md, 'Test vector': the MQTT password of the key 0x00..0x1f.
const PASSWORD = '3498d033a6b45a25fe69931b400415720e4b621acb9f061b306fa083cd8677df';
const hash = (text: string) => createHash('sha256').update(text).digest('hex');
const check = (directory: NodeDirectory, serial: string, password: string, nowMs = 0) =>
	directory.check(serial, Buffer.from(password), nowMs);

function known(): NodeDirectory {
	const directory = new NodeDirectory(1_000);
	directory.stage([{ serial: 'NODE-0001', hashes: [hash(PASSWORD)] }], 'only');
	directory.vouch(0);
	return directory;
}

test('a known node signs in by its password; wrong password and unknown serial are refused alike', () => {
	const directory = known();
	expect(check(directory, 'NODE-0001', PASSWORD)).toEqual({ ok: true, hash: hash(PASSWORD) });
	expect(check(directory, 'NODE-0001', 'wrong')).toEqual({ ok: false, reason: 'refused' });
	expect(check(directory, 'NODE-0002', PASSWORD)).toEqual({ ok: false, reason: 'refused' });
	expect(check(directory, 'NODE-0001', '')).toEqual({ ok: false, reason: 'refused' });
});

test('while nobody vouches, known nodes are let in and all others told to come again', () => {
	const directory = known();
	for (const doubt of [() => directory.doubt(), () => undefined]) {
		doubt();
		expect(check(directory, 'NODE-0001', PASSWORD, 1_000)).toMatchObject({ ok: true });
		expect(check(directory, 'NODE-0001', 'wrong', 1_000)).toMatchObject({ reason: 'unavailable' });
		expect(check(directory, 'NODE-0002', 'wrong', 1_000)).toMatchObject({ reason: 'unavailable' });
	}
});

test('during a key overlap both passwords hold, afterwards one', () => {
	const directory = known();
	directory.change([{ serial: 'NODE-0001', hashes: [hash('new'), hash(PASSWORD)] }], []);
	expect(check(directory, 'NODE-0001', PASSWORD).ok).toBe(true);
	expect(check(directory, 'NODE-0001', 'new').ok).toBe(true);
	directory.change([{ serial: 'NODE-0001', hashes: [hash('new')] }], []);
	expect(check(directory, 'NODE-0001', PASSWORD).ok).toBe(false);
	expect(directory.allows('NODE-0001', hash(PASSWORD))).toBe(false);
	expect(directory.allows('NODE-0001', hash('new'))).toBe(true);
});

test('a full list takes effect with its last part, changes on the way included', () => {
	const directory = known();
	directory.stage([{ serial: 'AAAA', hashes: [hash('a')] }], 'first');
	expect(check(directory, 'NODE-0001', PASSWORD).ok).toBe(true);
	expect(check(directory, 'AAAA', 'a').ok).toBe(false);
	directory.change([], ['AAAA']);
	directory.stage([{ serial: 'BBBB', hashes: [hash('b')] }], 'last');
	expect(directory.size).toBe(1);
	expect(check(directory, 'NODE-0001', PASSWORD).ok).toBe(false);
	expect(check(directory, 'BBBB', 'b').ok).toBe(true);
});

test('an entry without a usable hash lets nobody in', () => {
	const directory = new NodeDirectory(1_000);
	directory.stage([{ serial: 'NODE-0001', hashes: ['', 'zz', '00'] }], 'only');
	expect(check(directory, 'NODE-0001', '').ok).toBe(false);
});

test('a secret is compared whole', () => {
	expect(sameSecret(Buffer.from('secret'), 'secret')).toBe(true);
	expect(sameSecret(Buffer.from('secre'), 'secret')).toBe(false);
	expect(sameSecret(Buffer.from(''), 'secret')).toBe(false);
});
