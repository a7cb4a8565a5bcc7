import { randomBytes } from 'node:crypto';
import { readlinkSync } from 'node:fs';
import { hostname } from 'node:os';

/** Which machine and which container's process table a process id belongs to. */
function here(): string {
	let space = '';
	try {
		space = readlinkSync('/proc/self/ns/pid').replace(/\D/g, '');
	} catch {
		// No Linux: the host's name alone tells.
	}
	return `${hostname().slice(0, 24)}/${space}`;
}

/** The name under which this process holds the lease; at most 64 characters. */
export const holderName = (): string =>
	`${here()}/${process.pid}/${randomBytes(4).toString('hex')}`;

/** Whether a holder was a process of this machine that is gone: its lease need not run out. */
export function isGone(holder: string): boolean {
	const parts = holder.split('/');
	const pid = Number(parts.at(-2));
	if (parts.slice(0, -2).join('/') !== here() || !Number.isInteger(pid) || pid === process.pid)
		return false;
	try {
		process.kill(pid, 0);
		return false;
	} catch (error) {
		return (error as NodeJS.ErrnoException).code === 'ESRCH';
	}
}
