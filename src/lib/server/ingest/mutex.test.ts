import { expect, test } from 'vitest';
import { Mutex } from './mutex';

test('one at a time, in the order of asking, also after a failure', async () => {
	const mutex = new Mutex();
	const seen: string[] = [];
	const turn = async (name: string, fails = false) =>
		await mutex.run(async () => {
			seen.push(`${name} in`);
			await Promise.resolve();
			seen.push(`${name} out`);
			if (fails) throw new Error(name);
		});
	const turns = await Promise.allSettled([turn('a'), turn('b', true), turn('c')]);
	expect(turns.map(({ status }) => status)).toEqual(['fulfilled', 'rejected', 'fulfilled']);
	expect(seen).toEqual(['a in', 'a out', 'b in', 'b out', 'c in', 'c out']);
});
