// Plain JavaScript without packages: the first thing a fresh clone runs.
import { execFileSync, spawnSync } from 'node:child_process';
import { createHash } from 'node:crypto';
import { existsSync, readFileSync, statSync, writeFileSync } from 'node:fs';
import { delimiter, join, resolve } from 'node:path';

export const ROOT = resolve(import.meta.dirname, '../..');
const at = (...parts) => join(ROOT, ...parts);

/** What a person can mend, in one sentence. */
class Refusal extends Error {}

/** Ends the set-up with one sentence that a person can act on. */
function fail(sentence) {
	throw new Refusal(sentence);
}

/** Runs the set-up; a refusal ends the process in its own words. */
export function orEnd(setUp) {
	try {
		setUp();
	} catch (error) {
		if (!(error instanceof Refusal)) throw error;
		console.error(`Lodekeep cannot start: ${error.message}`);
		process.exit(1);
	}
}

/** One plain line about one part. */
export function line(part, text) {
	console.log(`${part.padEnd(10)} ${text}`);
}

export function checkNode() {
	const [major, minor] = process.versions.node.split('.').map(Number);
	if (major < 20 || (major === 20 && minor < 19))
		fail(`Node ${process.versions.node} is too old. Install Node 20.19 or later.`);
	if (process.platform !== 'linux') fail('it runs on Linux only (it needs setpriv and /proc).');
}

/** Debian puts servers where a plain user's PATH does not look; a test sets this to nothing. */
const SYSTEM_PATH = process.env.LODEKEEP_SYSTEM_PATH ?? '/usr/sbin:/sbin';

/** Whether a program is there. */
export function isInstalled(program) {
	const folders = `${process.env.PATH ?? ''}${delimiter}${SYSTEM_PATH}`;
	return folders.split(delimiter).some((folder) => existsSync(join(folder, program)));
}

/** Debian packages by the program that shows each is there. */
export const DATABASE_PACKAGES = {
	mariadbd: 'mariadb-server-core',
	'mariadb-install-db': 'mariadb-server-core',
	mariadb: 'mariadb-client',
	setpriv: 'util-linux'
};

export function installDebian(packagesByProgram) {
	const missing = Object.entries(packagesByProgram).filter(([program]) => !isInstalled(program));
	const packages = [...new Set(missing.map(([, name]) => name))];
	if (packages.length === 0) return;
	const names = packages.join(' ');
	if (!isInstalled('apt-get'))
		fail(
			`${names} is missing and there is no apt-get here. Install MariaDB 10.6 or later by hand.`
		);
	if (process.getuid() !== 0)
		fail(`${names} is missing. Run: sudo apt-get install --no-install-recommends ${names}`);
	line('packages', `installing ${names} (about a minute)`);
	const env = { ...process.env, DEBIAN_FRONTEND: 'noninteractive' };
	const apt = (args) => spawnSync('apt-get', args, { env, encoding: 'utf8' });
	let result = apt(['install', '-y', '-q', '--no-install-recommends', ...packages]);
	if (result.status !== 0) {
		// A fresh machine has no package lists yet.
		apt(['update', '-q']);
		result = apt(['install', '-y', '-q', '--no-install-recommends', ...packages]);
	}
	if (result.status === 0) return;
	const reason = `${result.stderr ?? ''}`.trim().split('\n').at(-1);
	fail(`apt-get could not install ${names}: ${reason}`);
}

const LOCK = 'package-lock.json';
const MARK = join('node_modules', '.lodekeep-lock');

const hashOfLock = () =>
	createHash('sha256')
		.update(readFileSync(at(LOCK)))
		.digest('hex');

const readJson = (path) => JSON.parse(readFileSync(path, 'utf8'));

/** npm's own list of what it installed, held against the lock file: every package at its version. */
function isAllThere() {
	const hidden = at('node_modules', '.package-lock.json');
	if (!existsSync(hidden)) return false;
	const have = readJson(hidden).packages;
	return Object.entries(readJson(at(LOCK)).packages).every(
		([path, { version, optional }]) =>
			path === '' || have[path]?.version === version || (optional === true && !have[path])
	);
}

/** npm says what is wrong first, and how its commands are used last. */
const firstWords = (stderr) =>
	`${stderr ?? ''}`
		.split('\n')
		.map((text) => text.replace(/^npm error ?/, '').trim())
		.filter((text) => text !== '')
		.slice(0, 4)
		.join(' ');

/** `npm ci` when the lock file changed since the last time. */
export function installNpm() {
	const hash = hashOfLock();
	if (existsSync(at(MARK)) && readFileSync(at(MARK), 'utf8') === hash) return;
	if (!isAllThere()) {
		line('npm', 'installing the packages of package-lock.json (about a minute)');
		const args = ['ci', '--include=dev', '--loglevel=error', '--no-progress'];
		const result = spawnSync('npm', args, { cwd: ROOT, encoding: 'utf8' });
		if (result.status !== 0) {
			fail(`npm ci did not succeed: ${firstWords(result.stderr) || result.error?.message}`);
		}
	}
	writeFileSync(at(MARK), hash);
}

/** Kit generates the tsconfig that gives `$lib` its meaning, for tsx too. */
export function syncKit() {
	const made = at('.svelte-kit', 'tsconfig.json');
	const madeMs = existsSync(made) ? statSync(made).mtimeMs : 0;
	if (statSync(at('svelte.config.js')).mtimeMs <= madeMs) return;
	line('kit', 'generating types');
	try {
		execFileSync(at('node_modules', '.bin', 'svelte-kit'), ['sync'], { cwd: ROOT, stdio: 'pipe' });
	} catch (error) {
		fail(`svelte-kit sync did not succeed: ${`${error.stderr}`.trim().split('\n').at(-1)}`);
	}
}
