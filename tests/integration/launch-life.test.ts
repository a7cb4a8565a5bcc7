import { execFile } from 'node:child_process';
import { readFile, stat } from 'node:fs/promises';
import { join } from 'node:path';
import { promisify } from 'node:util';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { dataFolder, isAlive, startProduct, type Product } from '../support/product';

/** One data folder through its life; each test goes on where the one before it stopped. */
const run = promisify(execFile);
let folder: Awaited<ReturnType<typeof dataFolder>>;
let product: Product;

beforeAll(async () => {
	folder = await dataFolder();
	product = startProduct(folder.dir);
	// It builds first when the sources are newer than the build.
	await product.until('is up: ', 280_000);
}, 300_000);

afterAll(async () => {
	product.process.kill('SIGTERM');
	await product.ended;
	await folder.remove();
});

const mode = async (name: string) =>
	((await stat(join(folder.dir, name))).mode & 0o777).toString(8);

const partsStopped = (text: string) =>
	[...text.matchAll(/^(\w+) +stopped$/gm)].map((match) => match[1]);

async function pidsOfAll(): Promise<number[]> {
	return (await product.runFile()).children.map(({ pid }) => pid);
}

async function restart(): Promise<number> {
	const beganMs = performance.now();
	product = startProduct(folder.dir);
	await product.until('is up: ');
	return performance.now() - beganMs;
}

test('a first start says one line a part, the address, and the first admin once', () => {
	const parts = product.said().split('\n');
	for (const part of ['database', 'mail', 'broker', 'app'])
		expect(parts.filter((line) => line.startsWith(`${part} `))).not.toHaveLength(0);
	expect(product.said()).toMatch(
		/first admin: admin@lodekeep\.example {2}\w{5}-\w{5}-\w{5}-\w{5}\n/
	);
	expect(product.said()).toMatch(/is up: http:\/\/127\.0\.0\.1:\d+/);
});

test('what holds secrets is for its owner only', async () => {
	expect(await mode('.')).toBe('700');
	expect(await mode('db')).toBe('700');
	for (const name of ['run.json', 'secret', 'first-passwords.txt', 'log/app.log'])
		expect(await mode(name)).toBe('600');
	const kept = await readFile(join(folder.dir, 'first-passwords.txt'), 'utf8');
	const password = /admin@lodekeep\.example {2}(\S+)/.exec(product.said())?.[1];
	expect(kept).toBe(`first admin\tadmin@lodekeep.example\t${password}\n`);
});

test('the database listens on loopback only, and the root account on its socket only', async () => {
	const { databaseUrl } = await product.runFile();
	const port = new URL(databaseUrl!).port;
	const { stdout } = await run('ss', ['-ltnH', `sport = :${port}`]);
	expect(stdout.trim().split('\n')).toHaveLength(1);
	expect(stdout).toContain(`127.0.0.1:${port}`);
	const tcp = ['-h127.0.0.1', `-P${port}`, '-uroot', '-e', 'SELECT 1'];
	await expect(run('mariadb', ['--no-defaults', ...tcp])).rejects.toThrow(/Access denied/);
	const socket = ['-S', 'mariadb.sock', '-uroot', '-N', '-e', 'SELECT User, Host FROM mysql.user'];
	const users = await run('mariadb', ['--no-defaults', ...socket], { cwd: join(folder.dir, 'db') });
	expect(users.stdout.trim().split('\n').sort()).toEqual([
		'lodekeep\t127.0.0.1',
		'mariadb.sys\tlocalhost',
		'root\tlocalhost'
	]);
});

test('npm run key prints one key and nothing else, while the product runs', async () => {
	const env = { ...process.env, LODEKEEP_DATA: folder.dir };
	const words = ['run', 'key', '--', '--name', 'a test', '--scopes', 'occupancy,telemetry'];
	const { stdout } = await run('npm', words, { env });
	expect(stdout).toMatch(/^lodekeep_[0-9a-z]+_[0-9a-z]+\n$/);
	const bad = run('npm', [...words, '--sites', 'nowhere'], { env });
	await expect(bad).rejects.toMatchObject({
		stdout: '',
		stderr: "No key was made: there is no site 'nowhere'.\n"
	});
});

test('a second start beside the first is refused with a sentence', async () => {
	const second = startProduct(folder.dir);
	expect(await second.ended).toBe(1);
	expect(second.said()).toContain(`running here already (process ${product.process.pid},`);
	expect(isAlive(await product.pidOf('app'))).toBe(true);
});

test('app, broker and database killed one after the other are started again', async () => {
	const before = (await product.runFile()).databaseUrl;
	for (const part of ['app', 'broker', 'database']) {
		const pid = await product.pidOf(part);
		process.kill(pid, 'SIGKILL');
		await product.until(`${part.padEnd(10)} is up again`);
		expect(await product.pidOf(part)).not.toBe(pid);
	}
	expect((await product.runFile()).databaseUrl).toBe(before);
});

test('Ctrl-C stops app, mail, broker, database in this order and leaves nothing', async () => {
	const pids = await pidsOfAll();
	process.kill(-product.process.pid!, 'SIGINT');
	expect(await product.ended).toBe(0);
	expect(partsStopped(product.said())).toEqual(['app', 'broker', 'mail', 'database']);
	expect(pids.filter(isAlive)).toEqual([]);
	await expect(product.runFile()).rejects.toThrow();
});

test('a second start is up in seconds, with the data still there', async () => {
	// A few seconds alone; measured 18 s on two cores with seven other programs at work.
	expect(await restart()).toBeLessThan(30_000);
	expect(product.said()).not.toContain('first admin');
	expect(product.said()).not.toContain('changes of layout');
});

test('a start that was killed blocks nothing: the next one is up, and the former parts are gone', async () => {
	const pids = await pidsOfAll();
	product.process.kill('SIGKILL');
	await product.ended;
	await restart();
	expect(pids.filter(isAlive)).toEqual([]);
});

test('SIGTERM stops all parts and leaves nothing', async () => {
	const pids = await pidsOfAll();
	product.process.kill('SIGTERM');
	expect(await product.ended).toBe(0);
	expect(pids.filter(isAlive)).toEqual([]);
});

test('a wrong secret is refused, and the database is stopped again', async () => {
	const wrong = startProduct(folder.dir, { LODEKEEP_SECRET: 'w'.repeat(40) });
	expect(await wrong.ended).toBe(1);
	expect(wrong.said()).toContain('LODEKEEP_SECRET is not the one this database was made with');
	expect(partsStopped(wrong.said())).toEqual(['database']);
});
