import { mkdtemp, readdir, rm, stat } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { createTransport } from 'nodemailer';
import { expect, onTestFinished, test } from 'vitest';
import * as catcher from '../lib/server/outbox/catcher';
import { startMailCatcher } from './mail';

async function folder(name: string): Promise<string> {
	const dir = await mkdtemp(join(tmpdir(), `${name}-`));
	onTestFinished(async () => {
		await rm(dir, { recursive: true });
	});
	return dir;
}

test('a mail sent to the catcher is kept for its owner only, listed, and read whole', async () => {
	const dataDir = await folder('lodekeep-mail');
	const server = await startMailCatcher(join(dataDir, 'mail'));
	const transport = createTransport({ host: '127.0.0.1', port: server.port });
	const text = 'Bay Å-07: 12 mG — look at it.\n';
	await transport.sendMail({ from: 'a@x.example', to: 'b@y.example', subject: 'Größe', text });
	await server.close();
	const [file] = await readdir(join(dataDir, 'mail'));
	expect((await stat(join(dataDir, 'mail', file!))).mode & 0o777).toBe(0o600);
	const [mail] = await catcher.list(dataDir);
	expect(mail).toMatchObject({ from: 'a@x.example', to: 'b@y.example', subject: 'Größe' });
	expect((await catcher.read(dataDir, mail!.id))?.text).toBe(text);
});

test('an id that is no id reaches no file', async () => {
	expect(await catcher.read('/', '../../etc/passwd')).toBeNull();
	expect(await catcher.read('/nowhere', '1700000000000-0123456789ab')).toBeNull();
	expect(await catcher.list('/nowhere')).toEqual([]);
});
