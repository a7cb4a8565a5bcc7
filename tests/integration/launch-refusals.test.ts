import { createServer, type Server } from 'node:net';
import { chmod, mkdir, writeFile } from 'node:fs/promises';
import { join } from 'node:path';
import { afterAll, beforeAll, expect, test } from 'vitest';
import { dataFolder, startProduct } from '../support/product';

let folder: Awaited<ReturnType<typeof dataFolder>>;

beforeAll(async () => {
	folder = await dataFolder();
});

afterAll(async () => {
	await folder.remove();
});

/** What a start says that cannot go on; it always ends with code 1 and one sentence. */
async function refusal(env: Record<string, string>, name = 'fresh'): Promise<string> {
	const product = startProduct(join(folder.dir, name), env);
	expect(await product.ended).toBe(1);
	return product.said();
}

async function occupied(): Promise<{ server: Server; port: number }> {
	const server = createServer();
	await new Promise<void>((resolve) => {
		server.listen(0, '127.0.0.1', () => {
			resolve();
		});
	});
	return { server, port: (server.address() as { port: number }).port };
}

test.each(['PORT', 'MQTT_PORT'])('a taken %s is told before anything is started', async (name) => {
	const { server, port } = await occupied();
	expect(await refusal({ [name]: String(port) })).toBe(
		`Lodekeep cannot start: port ${port} on 127.0.0.1 is taken by another program. Stop that one, or set ${name} to a free port.\n`
	);
	server.close();
});

test('bad settings are told each in a sentence', async () => {
	expect(await refusal({ PORT: 'x', LODEKEEP_DEMO: 'perhaps' })).toBe(
		'Lodekeep cannot start: PORT must be a port number.\nLodekeep cannot start: LODEKEEP_DEMO must be on or off.\n'
	);
});

test('a data folder of a newer version is left alone', async () => {
	const dir = join(folder.dir, 'newer');
	await mkdir(dir);
	await writeFile(join(dir, 'layout.json'), '{"layout":7,"mariadb":"10.11"}');
	expect(await refusal({}, 'newer')).toContain('was made by a newer Lodekeep (layout 7');
});

test('a data folder written by a newer MariaDB is left alone', async () => {
	const dir = join(folder.dir, 'future');
	await mkdir(dir);
	await writeFile(join(dir, 'layout.json'), '{"layout":1,"mariadb":"99.1"}');
	expect(await refusal({}, 'future')).toContain(
		'was written by MariaDB 99.1, and the one installed is'
	);
});

test('a file in place of the data folder is told', async () => {
	await writeFile(join(folder.dir, 'file'), '');
	expect(await refusal({}, 'file')).toContain('is not a folder. Set LODEKEEP_DATA to another one.');
});

test('a database of somebody else that does not let us in is told', async () => {
	const { server, port } = await occupied();
	server.close();
	const url = `mysql://u:p@127.0.0.1:${port}/d`;
	const product = startProduct(join(folder.dir, 'external'), { DATABASE_URL: url });
	await product.until(`waiting for 127.0.0.1:${port} (ECONNREFUSED)`);
	product.process.kill('SIGTERM');
	expect(await product.ended).toBe(0);
	expect(product.said()).not.toContain('u:p');
});

/** A PATH on which these programs alone are found. */
async function pathWith(programs: Record<string, string>): Promise<string> {
	const bin = join(folder.dir, `bin-${Object.keys(programs).join('-')}`);
	await mkdir(bin);
	for (const [name, script] of Object.entries(programs)) {
		await writeFile(join(bin, name), `#!/bin/sh\n${script}\n`);
		await chmod(join(bin, name), 0o755);
	}
	return bin;
}

test('without MariaDB and without apt-get a person is told what to install', async () => {
	expect(await refusal({ PATH: await pathWith({}), LODEKEEP_SYSTEM_PATH: '' })).toContain(
		'is missing and there is no apt-get here. Install MariaDB 10.6 or later by hand.'
	);
});

test('an apt-get that fails is told with its last words', async () => {
	const PATH = await pathWith({
		'apt-get': 'echo "E: Unable to fetch some archives" >&2; exit 100'
	});
	expect(await refusal({ PATH, LODEKEEP_SYSTEM_PATH: '' })).toContain(
		process.getuid?.() === 0
			? 'apt-get could not install mariadb-server-core mariadb-client util-linux: E: Unable to fetch some archives'
			: 'sudo apt-get install'
	);
});

test('a disk that is full is told', async () => {
	const PATH = `${await pathWith({
		'mariadb-install-db':
			'echo "mariadbd: Error writing file (Errcode: 28 No space left on device)" >&2; exit 1'
	})}:${process.env['PATH']}`;
	const said = await refusal({ PATH }, 'full');
	expect(said).toContain('could not be made');
	expect(said).toContain('No space left on device');
});
