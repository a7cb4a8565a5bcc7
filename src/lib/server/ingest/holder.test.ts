import { spawnSync } from 'node:child_process';
import { expect, test } from 'vitest';
import { holderName, isGone } from './holder';

test('a name fits its column and is not its own ghost', () => {
	const name = holderName();
	expect(name.length).toBeLessThanOrEqual(64);
	expect(isGone(name)).toBe(false);
	expect(holderName()).not.toBe(name);
});

test('a process of this machine that has ended is gone, one of another machine is not known to be', () => {
	const { pid } = spawnSync(process.execPath, ['-e', '']);
	const dead = holderName().replace(`/${process.pid}/`, `/${pid}/`);
	expect(isGone(dead)).toBe(true);
	expect(isGone(`x${dead}`)).toBe(false);
	expect(isGone('another copy')).toBe(false);
});
