import { expect, test } from 'vitest';
import { SeenBlocks } from './seen-blocks';

const id = (seq: number, boot = 1) => ({ nodeId: 7, boot, seq });

/** All that is asked for is not stored. */
function empty(ids: ReturnType<typeof id>[]): SeenBlocks {
	const seen = new SeenBlocks();
	seen.learn(seen.missing(ids), []);
	return seen;
}

test('each of the 64 bits of a block is its own, the sign bits of both halves too', () => {
	const all = Array.from({ length: 64 }, (_, i) => id(i));
	for (const one of all) {
		const seen = empty(all);
		const block = seen.note(one);
		const bits = (BigInt(block.high >>> 0) << 32n) | BigInt(block.low >>> 0);
		expect(bits).toBe(1n << BigInt(one.seq));
		expect(all.filter((other) => seen.isStored(other))).toEqual([one]);
	}
});

test('the same seq of another boot is another message', () => {
	const seen = empty([id(3), id(3, 2)]);
	seen.note(id(3));
	expect(seen.isStored(id(3, 2))).toBe(false);
});

test('what was found is stored, what was asked for and not found is not', () => {
	const seen = new SeenBlocks();
	const asked = seen.missing([id(0), id(64), id(1)]);
	expect(asked).toHaveLength(2);
	seen.learn(asked, [{ nodeId: 7, boot: 1, block: 1, low: 1, high: 0 }]);
	expect([id(0), id(64), id(65)].map((one) => seen.isStored(one))).toEqual([false, true, false]);
	expect(seen.missing([id(2), id(100)])).toEqual([]);
});

test('the largest seq and boot of the protocol fit', () => {
	const most = id(2 ** 32 - 1, 2 ** 32 - 1);
	const seen = empty([most]);
	seen.note(most);
	expect(seen.isStored(most)).toBe(true);
	expect(seen.isStored(id(2 ** 32 - 2, 2 ** 32 - 1))).toBe(false);
});

test('trimming keeps the blocks used last and forgets the oldest, which are then read again', () => {
	const ids = Array.from({ length: 40 }, (_, i) => id(i * 64));
	const seen = empty(ids);
	for (const one of ids) seen.note(one);
	// Within a batch everything that was read stays.
	expect(seen.missing(ids)).toEqual([]);
	seen.trim([7]);
	expect(seen.missing(ids).map(({ block }) => block)).toEqual(
		Array.from({ length: 24 }, (_, i) => i)
	);
});
