import { expect, test } from 'vitest';
import { Devices, Sessions, SESSION_MAX_AGE_S } from './session';

const keys = (secret: string, ...former: string[]) => ({
	secrets: [secret, ...former],
	secure: false
});
const NOW = Date.now();

test('a session reads back as issued', async () => {
	const sessions = new Sessions(keys('one'));
	const session = await sessions.read(await sessions.issue(12, 3), NOW);
	expect(session).toMatchObject({ personId: 12, version: 3 });
});

test('a remembered session still ends on time', async () => {
	const sessions = new Sessions(keys('one'));
	const cookie = await sessions.issue(12, 3);
	expect(await sessions.read(cookie, NOW)).not.toBeNull();
	expect(await sessions.read(cookie, NOW + (SESSION_MAX_AGE_S + 60) * 1000)).toBeNull();
});

test('a former secret still opens, another does not, and an altered cookie is none', async () => {
	const cookie = await new Sessions(keys('one')).issue(12, 3);
	expect(await new Sessions(keys('two', 'one')).read(cookie, NOW)).not.toBeNull();
	expect(await new Sessions(keys('two')).read(cookie, NOW)).toBeNull();
	expect(await new Sessions(keys('one')).read(`${cookie.slice(0, -2)}xx`, NOW)).toBeNull();
	expect(await new Sessions(keys('one')).read('x'.repeat(5000), NOW)).toBeNull();
});

test('a device cookie speaks for its own person only', () => {
	const devices = new Devices(Buffer.alloc(32, 1));
	const cookie = devices.issue(12);
	expect(devices.idFor(cookie, 12)).toMatch(/^12\./);
	expect(devices.idFor(cookie, 13)).toBeNull();
	expect(devices.idFor(cookie.replace('12.', '13.'), 13)).toBeNull();
	expect(new Devices(Buffer.alloc(32, 2)).idFor(cookie, 12)).toBeNull();
	expect(devices.idFor(undefined, 12)).toBeNull();
});
