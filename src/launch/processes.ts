import { spawn } from 'node:child_process';
import { openSync, closeSync } from 'node:fs';
import { readFile } from 'node:fs/promises';

/** A process that this launcher started and ends. */
export interface Child {
	readonly name: string;
	readonly pid: number;
	readonly ended: Promise<void>;
	/** SIGTERM, and SIGKILL when it takes too long. */
	stop(): Promise<void>;
}

export interface ChildOptions {
	name: string;
	args: string[];
	env: NodeJS.ProcessEnv;
	/** Standard output and error are appended here. */
	logFile: string;
	/** How long a clean end may take, ms. */
	stopMs: number;
}

/**
 * Starts node under setpriv: should the launcher be killed, the kernel sends the child SIGTERM. Its own
 * process group keeps Ctrl-C at the terminal away from it: only the launcher hears that.
 */
export function startNode(options: ChildOptions): Child {
	const log = openSync(options.logFile, 'a', 0o600);
	const child = spawn('setpriv', ['--pdeathsig', 'TERM', process.execPath, ...options.args], {
		env: options.env,
		detached: true,
		stdio: ['ignore', log, log]
	});
	closeSync(log);
	const ended = new Promise<void>((resolve) => {
		child.once('exit', () => {
			resolve();
		});
		child.once('error', () => {
			resolve();
		});
	});
	return {
		name: options.name,
		pid: child.pid ?? 0,
		ended,
		stop: async () => {
			child.kill('SIGTERM');
			const force = setTimeout(() => child.kill('SIGKILL'), options.stopMs);
			await ended;
			clearTimeout(force);
		}
	};
}

/**
 * When a process began, in clock ticks since boot (proc(5), /proc/pid/stat field 22), or null when
 * there is none. Process ids are used again; the pair is not, short of a reboot.
 */
export async function startTicks(pid: number): Promise<string | null> {
	const stat = await readFile(`/proc/${pid}/stat`, 'utf8').catch(() => null);
	if (stat === null) return null;
	// The name in brackets may hold blanks and brackets itself: count from the last one.
	const fields = stat.slice(stat.lastIndexOf(')') + 2).split(' ');
	// A zombie has ended already and waits only for its parent.
	return fields[0] === 'Z' ? null : (fields[19] ?? null);
}

/** Changes with each boot of the machine, so that ticks of another boot are never compared. */
export async function bootId(): Promise<string> {
	return (await readFile('/proc/sys/kernel/random/boot_id', 'utf8').catch(() => '')).trim();
}
