import { execFile } from 'node:child_process';
import { readFile } from 'node:fs/promises';
import { get } from 'node:https';
import { join } from 'node:path';
import { promisify } from 'node:util';
import { afterAll, beforeAll, expect, test } from 'vitest';
import type { RowDataPacket } from 'mysql2/promise';
import { connect, type Store } from '$lib/server/store/connect';
import { dataFolder, startProduct, type Product } from '../support/product';
import { startDatabase, type TestDatabase } from '../support/database';
import { freePort } from '../../src/launch/mariadb';

/** With a database, certificates and a first admin of somebody else's making. */
const run = promisify(execFile);
let server: TestDatabase;
let store: Store;
let folder: Awaited<ReturnType<typeof dataFolder>>;
let product: Product;
let environment: Record<string, string>;

beforeAll(async () => {
	server = await startDatabase({ empty: true });
	store = connect(server.url);
	folder = await dataFolder();
	const [cert, key] = ['cert.pem', 'key.pem'].map((name) => join(folder.dir, name)) as [
		string,
		string
	];
	const subject = ['-subj', '/CN=keep.example', '-days', '2', '-nodes'];
	await run('openssl', [
		'req',
		'-x509',
		'-newkey',
		'rsa:2048',
		...subject,
		'-keyout',
		key,
		'-out',
		cert
	]);
	environment = {
		DATABASE_URL: server.url,
		...{ TLS_CERT: cert, TLS_KEY: key },
		...{ MQTT_TLS_CERT: cert, MQTT_TLS_KEY: key, MQTT_TLS_PORT: String(await freePort()) },
		LODEKEEP_ADMIN_EMAIL: 'Keeper@Keep.Example',
		LODEKEEP_ADMIN_PASSWORD: 'a password of our own'
	};
	product = startProduct(join(folder.dir, 'data'), environment);
	await product.until('is up: ', 280_000);
}, 300_000);

afterAll(async () => {
	product.process.kill('SIGTERM');
	await product.ended;
	await store.close();
	await server.close();
	await folder.remove();
});

/** Status of a request that takes any certificate, or what went wrong with it. */
async function statusOf(url: string): Promise<number | string | undefined> {
	return await new Promise((resolve) => {
		get(url, { rejectUnauthorized: false, agent: false }, (answer) => {
			answer.resume();
			resolve(answer.statusCode);
		}).on('error', (error) => {
			resolve(error.message);
		});
	});
}

test('the database given is used: no other is started, and no demo is made in it', async () => {
	expect(product.said()).toContain(`database   in use at ${new URL(server.url).host}`);
	const { children, databaseUrl } = await product.runFile();
	expect(children.map(({ name }) => name).sort()).toEqual(['app', 'broker']);
	// Somebody else's password is not copied to a file.
	expect(databaseUrl).toBeNull();
});

test('pages are served over TLS with the certificate given', async () => {
	const address = /is up: (https:\/\/\S+)/.exec(product.said())?.[1];
	const status = await statusOf(`${address}/sign-in`);
	const log = await readFile(join(folder.dir, 'data', 'log', 'app.log'), 'utf8');
	expect(status, `${product.said()}\n${log}`).toBe(200);
});

test('nodes are heard over TLS', async () => {
	const args = ['s_client', '-connect', `127.0.0.1:${environment['MQTT_TLS_PORT']}`];
	const { stdout } = await run('sh', ['-c', `openssl ${args.join(' ')} < /dev/null`]);
	expect(stdout).toContain('CN = keep.example');
});

test('an admin given with a password is made without printing it, and need not change it', async () => {
	expect(product.said()).not.toContain('a password of our own');
	const [people] = await store.pool.query<RowDataPacket[]>(
		'SELECT email, must_change_password AS must, demo FROM person'
	);
	expect(people).toEqual([{ email: 'keeper@keep.example', must: 0, demo: 0 }]);
});

test('the secret of one data folder is refused on the database of another', async () => {
	const other = startProduct(join(folder.dir, 'other'), environment);
	await other.until('taken by another program');
	expect(await other.ended).toBe(1);
	const ports = { ...environment, MQTT_TLS_PORT: String(await freePort()) };
	const second = startProduct(join(folder.dir, 'other'), ports);
	expect(await second.ended).toBe(1);
	expect(second.said()).toContain('LODEKEEP_SECRET is not the one this database was made with');
});
