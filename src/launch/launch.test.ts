import { createServer } from 'node:net';
import { mkdtemp, rm, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { expect, onTestFinished, test } from 'vitest';
import { requireConfig } from '../lib/server/config';
import { explain, openDataFolder, seriesOf } from './data-folder';
import { addressOf, childEnvironment } from './environment';
import { requireFree } from './ports';
import { installationSecret, readablePassword } from './secrets';
import { pauseMs } from './supervise';

const made = { databaseUrl: 'mysql://h/d', secret: 's', linkSecret: 'l', mailPort: 25 };

async function folder(name: string): Promise<string> {
	const dir = await mkdtemp(join(tmpdir(), `${name}-`));
	onTestFinished(async () => {
		await rm(dir, { recursive: true });
	});
	return dir;
}

test('a taken port is told with the variable that moves it', async () => {
	const server = createServer();
	await new Promise<void>((resolve) => server.listen(0, '127.0.0.1', () => resolve()));
	const { port } = server.address() as { port: number };
	await expect(requireFree('127.0.0.1', port, 'MQTT_PORT')).rejects.toThrow(
		`port ${port} on 127.0.0.1 is taken by another program. Stop that one, or set MQTT_PORT to a free port.`
	);
	await new Promise((resolve) => server.close(resolve));
	await requireFree('127.0.0.1', port, 'MQTT_PORT');
});

test('the address is ORIGIN where given, else host and port', () => {
	const address = (env: Record<string, string>) => addressOf(requireConfig(env));
	expect(address({})).toBe('http://127.0.0.1:5180');
	expect(address({ HOST: '0.0.0.0', PORT: '80' })).toBe('http://127.0.0.1:80');
	expect(address({ HOST: '::1' })).toBe('http://[::1]:5180');
	expect(address({ TLS_CERT: 'c', TLS_KEY: 'k' })).toBe('https://127.0.0.1:5180');
	expect(address({ ORIGIN: 'https://keep.example' })).toBe('https://keep.example');
});

test('the app is told its origin, unless a proxy names it', () => {
	const origin = (env: Record<string, string>) =>
		childEnvironment(requireConfig(env), made)['ORIGIN'];
	expect(origin({})).toBe('http://127.0.0.1:5180');
	expect(origin({ HOST_HEADER: 'x-forwarded-host' })).toBeUndefined();
});

test('the secret is made once, kept for its owner only, and taken from there again', async () => {
	const dataDir = await folder('lodekeep-secret');
	const config = { ...requireConfig({}), dataDir };
	const first = await installationSecret(config);
	expect(first.length).toBeGreaterThanOrEqual(43);
	expect(await installationSecret(config)).toBe(first);
	expect(await installationSecret({ ...config, secret: 'g'.repeat(32) })).toBe('g'.repeat(32));
});

test('a generated password has four groups of letters that cannot be mistaken, never the same', () => {
	const passwords = Array.from({ length: 200 }, readablePassword);
	for (const password of passwords)
		expect(password).toMatch(
			/^([abcdefghjkmnpqrstuvwxyz2-9]{5}-){3}[abcdefghjkmnpqrstuvwxyz2-9]{5}$/
		);
	expect(new Set(passwords).size).toBe(200);
});

test('a data folder made by a newer version is refused', async () => {
	const dir = await folder('lodekeep-folder');
	await openDataFolder(dir);
	await openDataFolder(dir);
	await writeFile(join(dir, 'layout.json'), '{"layout":99,"mariadb":null}');
	await expect(openDataFolder(dir)).rejects.toThrow('made by a newer Lodekeep (layout 99');
});

test('what the file system says becomes a sentence', () => {
	const sentence = (code: string) => String((explain({ code }, '/x') as Error).message);
	expect(sentence('ENOSPC')).toContain('the disk of /x is full');
	expect(sentence('EACCES')).toContain('may not write in /x');
	expect(sentence('ENOTDIR')).toContain('is not a folder');
	const other = new Error('x');
	expect(explain(other, '/x')).toBe(other);
});

test('the series is read from what mariadbd says of itself', () => {
	expect(seriesOf('mariadbd  Ver 10.11.19-MariaDB-0+deb12u1 for debian-linux-gnu')).toBe('10.11');
	expect(seriesOf('nonsense')).toBeNull();
});

test('a part that keeps ending is started again ever later, at most every half minute', () => {
	expect([0, 1, 2].map(pauseMs)).toEqual([500, 1_000, 2_000]);
	expect(pauseMs(20)).toBe(30_000);
});
