// npm test. Plain JavaScript: on a fresh machine there are no packages yet.
import { spawn } from 'node:child_process';
import { existsSync, mkdirSync, readFileSync, rmSync } from 'node:fs';
import { join } from 'node:path';
import {
	ROOT,
	checkNode,
	DATABASE_PACKAGES,
	installDebian,
	installNpm,
	syncKit
} from './prepare.mjs';

/** What `npm test` runs, in this order, with the share of time each may take, s. */
const SHARES_S = {
	'set-up': 180,
	checks: 180,
	unit: 90,
	integration: 210,
	accuracy: 90,
	e2e: 270,
	faults: 90,
	/** Only by name: axe as every role, in both themes and languages. */
	long: 1200
};
const SUITES = ['unit', 'integration', 'accuracy', 'e2e', 'faults'];
const BY_NAME = ['long'];
/** A suite that hangs is ended after this many of its shares; the long matrix has its own. */
const PATIENCE = process.env.LODEKEEP_LONG === '1' ? 60 : 4;
const TEST_PACKAGES = {
	...DATABASE_PACKAGES,
	chromium: 'chromium',
	mosquitto_pub: 'mosquitto-clients',
	openssl: 'openssl',
	ss: 'iproute2'
};
const OUT = join(ROOT, 'tests', '.out');

let passed = 0;
let failed = 0;
const children = new Set();

/** Runs one program to its end. `quiet` keeps what it says until it is known to matter. */
function run(program, args, { quiet = false, limitS }) {
	return new Promise((resolve) => {
		const stdio = ['ignore', quiet ? 'pipe' : 'inherit', quiet ? 'pipe' : 'inherit'];
		// A group of its own, so that a hung suite goes with the browser and database it started.
		const child = spawn(program, args, { cwd: ROOT, stdio, detached: true });
		children.add(child);
		let said = '';
		for (const stream of [child.stdout, child.stderr])
			stream?.on('data', (chunk) => (said += chunk));
		const timer = setTimeout(() => {
			said += `\nended after ${limitS} s: it took too long`;
			endGroup(child);
		}, limitS * 1000);
		const end = (code) => {
			clearTimeout(timer);
			children.delete(child);
			resolve({ code, said });
		};
		child.once('error', (error) => {
			said += error.message;
			end(1);
		});
		child.once('close', (code) => end(code ?? 1));
	});
}

function endGroup(child) {
	try {
		process.kill(-child.pid, 'SIGKILL');
	} catch {
		// It has ended by itself.
	}
}

/** Prints how long a part took, and a warning when that is over its share. */
async function timed(name, work) {
	const beganMs = performance.now();
	await work();
	const seconds = (performance.now() - beganMs) / 1000;
	const share = SHARES_S[name];
	const over = seconds > share ? `  WARNING: over its share of ${share} s` : '';
	console.log(`${name.padEnd(12)} ${seconds.toFixed(1)} s${over}`);
}

function count(name, good, why) {
	if (good) passed += 1;
	else failed += 1;
	console.log(`${name.padEnd(12)} ${good ? 'passed' : 'FAILED'}`);
	if (!good) console.log(why);
}

const bin = (name) => join(ROOT, 'node_modules', '.bin', name);

/** Format, lint and types: one check each. */
async function checks() {
	const limitS = SHARES_S.checks * PATIENCE;
	const all = [
		['format', bin('prettier'), ['--check', '.']],
		['lint', bin('eslint'), ['.', '--max-warnings', '0']],
		['types', bin('svelte-check'), ['--tsconfig', './tsconfig.json', '--output', 'human']]
	];
	const results = all.map(async ([name, program, args]) => {
		const { code, said } = await run(program, args, { quiet: true, limitS });
		count(name, code === 0, said);
	});
	await Promise.all(results);
}

/** One vitest project; its own report says how many tests there were. */
async function suite(name) {
	mkdirSync(OUT, { recursive: true });
	const report = join(OUT, `${name}.json`);
	rmSync(report, { force: true });
	const { code, said } = await run(
		process.execPath,
		[
			join(ROOT, 'node_modules', 'vitest', 'vitest.mjs'),
			...['run', '--project', name, '--reporter=default', '--reporter=json'],
			`--outputFile.json=${report}`
		],
		{ limitS: SHARES_S[name] * PATIENCE }
	);
	if (said !== '') console.log(said);
	countReport(name, report, code);
}

/** Every test that did not pass, every file that did not load, and a run that died count as failed. */
function countReport(name, report, code) {
	const found = readReport(report);
	if (found === null) {
		failed += 1;
		console.log(`${name.padEnd(12)} FAILED: it ended without a report (exit code ${code})`);
		return;
	}
	const brokenFiles = found.testResults.filter(
		({ status, assertionResults }) =>
			status === 'failed' && assertionResults.every((test) => test.status !== 'failed')
	).length;
	let bad = found.numFailedTests + brokenFiles;
	if (bad === 0 && (code !== 0 || found.numPassedTests === 0)) bad = 1;
	passed += found.numPassedTests;
	failed += bad;
	const left = found.numPendingTests + found.numTodoTests;
	const notRun = left > 0 ? `, ${left} not run` : '';
	console.log(`${name.padEnd(12)} ${found.numPassedTests} passed, ${bad} failed${notRun}`);
}

function readReport(report) {
	if (!existsSync(report)) return null;
	try {
		return JSON.parse(readFileSync(report, 'utf8'));
	} catch {
		return null;
	}
}

/** The browser suite looks at the built app, and so do the tests of the launcher. */
async function build() {
	const args = ['--import', 'tsx', join('src', 'launch', 'build-once.ts')];
	const { code, said } = await run(process.execPath, args, { quiet: true, limitS: 300 });
	if (code !== 0) count('build', false, said);
}

process.chdir(ROOT);
for (const signal of ['SIGINT', 'SIGTERM'])
	process.on(signal, () => {
		for (const child of children) endGroup(child);
		process.exit(130);
	});

const wanted = process.argv.slice(2);
for (const name of wanted.filter((name) => !(name in SHARES_S))) {
	failed += 1;
	console.log(`There is no suite '${name}': ${Object.keys(SHARES_S).join(', ')}`);
}
const isWanted = (name) => wanted.length === 0 || wanted.includes(name);
try {
	await timed('set-up', async () => {
		checkNode();
		installDebian(TEST_PACKAGES);
		installNpm();
		syncKit();
	});
	if (isWanted('checks')) await timed('checks', checks);
	let isBuilt = false;
	for (const name of [...SUITES.filter(isWanted), ...BY_NAME.filter((n) => wanted.includes(n))])
		await timed(name, async () => {
			if (name !== 'unit' && name !== 'accuracy' && !isBuilt) await build();
			isBuilt ||= name !== 'unit' && name !== 'accuracy';
			await suite(name);
		});
} catch (error) {
	failed += 1;
	console.log(`npm test itself failed: ${error.stack}`);
}
console.log(`${passed} passed, ${failed} failed`);
process.exitCode = failed > 0 ? 1 : 0;
