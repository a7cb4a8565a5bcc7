import { spawn } from 'node:child_process';
import { mkdtemp, rm, stat, writeFile } from 'node:fs/promises';
import { tmpdir } from 'node:os';
import { join } from 'node:path';
import { expect, onTestFinished, test } from 'vitest';
import { startTicks } from './processes';
import * as runFile from './run-file';

async function folder(): Promise<string> {
	const dir = await mkdtemp(join(tmpdir(), 'lodekeep-run-'));
	onTestFinished(async () => {
		await rm(dir, { recursive: true });
	});
	return dir;
}

function sleeper(): { pid: number; ended: Promise<unknown> } {
	const child = spawn('sleep', ['60'], { stdio: 'ignore' });
	return { pid: child.pid!, ended: new Promise((resolve) => child.once('exit', resolve)) };
}

/** A process id that certainly belongs to nobody any more. */
async function gone(): Promise<number> {
	const { pid, ended } = sleeper();
	process.kill(pid, 'SIGKILL');
	await ended;
	return pid;
}

async function leftBehind(dir: string, children: runFile.Running[]): Promise<void> {
	const file = await runFile.emptyRunFile('http://x');
	const launcher = { name: 'launcher', pid: await gone(), ticks: '1' };
	await runFile.rewrite(dir, { ...file, launcher, children });
}

test('the file is readable by its owner only: it holds the address of the database', async () => {
	const dir = await folder();
	await runFile.claim(dir, await runFile.emptyRunFile('http://x'));
	expect((await stat(join(dir, 'run.json'))).mode & 0o777).toBe(0o600);
	await runFile.rewrite(dir, await runFile.emptyRunFile('http://x'));
	expect((await stat(join(dir, 'run.json'))).mode & 0o777).toBe(0o600);
});

test('a folder in use is refused with the process and address that use it', async () => {
	const dir = await folder();
	const mine = await runFile.emptyRunFile('http://127.0.0.1:5180');
	expect((await runFile.claim(dir, mine)).ok).toBe(true);
	const second = await runFile.claim(dir, mine);
	expect(second.ok ? '' : second.reason).toContain(`process ${process.pid}, http://127.0.0.1:5180`);
});

test('a leftover with the same id and start time is ended', async () => {
	const dir = await folder();
	const { pid, ended } = sleeper();
	await leftBehind(dir, [await runFile.running('app', pid)]);
	const claim = await runFile.claim(dir, await runFile.emptyRunFile('http://x'));
	expect(claim).toMatchObject({ ok: true, leftovers: ['app'] });
	await ended;
});

test('a stranger who got the id of a leftover is left alone', async () => {
	const dir = await folder();
	const { pid, ended } = sleeper();
	const ticks = await startTicks(pid);
	await leftBehind(dir, [{ name: 'app', pid, ticks: String(Number(ticks) - 1) }]);
	const claim = await runFile.claim(dir, await runFile.emptyRunFile('http://x'));
	expect(claim).toMatchObject({ ok: true, leftovers: [] });
	expect(await startTicks(pid)).toBe(ticks);
	process.kill(pid, 'SIGKILL');
	await ended;
});

test('after a reboot ids and ticks mean nothing: nobody is ended', async () => {
	const dir = await folder();
	const { pid, ended } = sleeper();
	const file = await runFile.emptyRunFile('http://x');
	const children = [await runFile.running('app', pid)];
	await runFile.rewrite(dir, { ...file, boot: 'another boot', children });
	expect((await runFile.claim(dir, file)).ok).toBe(true);
	expect(await startTicks(pid)).not.toBeNull();
	process.kill(pid, 'SIGKILL');
	await ended;
});

test('a file cut short blocks nothing', async () => {
	const dir = await folder();
	await writeFile(join(dir, 'run.json'), '{"boot":"x","laun');
	const claim = await runFile.claim(dir, await runFile.emptyRunFile('http://x'));
	expect(claim.ok).toBe(true);
});

test('parts that are started again at the same time are all written down', async () => {
	const dir = await folder();
	const claim = await runFile.claim(dir, await runFile.emptyRunFile('http://x'));
	if (!claim.ok) throw new Error(claim.reason);
	const names = ['app', 'broker', 'database'];
	await Promise.all(
		names.map(async (name) => {
			await claim.record.remember(name, process.pid);
		})
	);
	const found = await runFile.readRunFile(dir);
	expect(found?.children.map(({ name }) => name).sort()).toEqual(names);
	await claim.record.remove();
	expect(await runFile.readRunFile(dir)).toBeNull();
});
