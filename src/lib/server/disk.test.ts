import { tmpdir } from 'node:os';
import { expect, test } from 'vitest';
import { diskFree, judge } from './disk';

test('1 GB is enough, under it the disk is low, under 200 MB acknowledgements are held', () => {
	expect(judge(1_000_000_000).level).toBe('ok');
	expect(judge(999_999_999).level).toBe('low');
	expect(judge(200_000_000).level).toBe('low');
	expect(judge(199_999_999).level).toBe('hold');
});

test('the free room of a real folder is a number of bytes', async () => {
	const { freeBytes } = await diskFree({ dataDir: tmpdir() });
	expect(freeBytes).toBeGreaterThan(0);
});
