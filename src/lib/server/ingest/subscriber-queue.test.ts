import { expect, test } from 'vitest';
import { SubscriberQueue } from './subscriber-queue';
import type { HeldMessage } from './subscriber-types';

const message = (receipt: number): HeldMessage => ({
	receipt,
	serial: 'NODE-0001',
	topic: 'lodekeep/1/NODE-0001/up/reading',
	bytes: new Uint8Array(),
	arrivedAtMs: 0,
	promised: true
});
const messages = (from: number, to: number) =>
	Array.from({ length: to - from + 1 }, (_, i) => message(from + i));
const receipts = (list: readonly HeldMessage[]) => list.map(({ receipt }) => receipt);

test('take waits for the first message and never gives more than asked', async () => {
	const queue = new SubscriberQueue();
	const taken = queue.take(2);
	queue.add(messages(1, 3));
	expect(receipts(await taken)).toEqual([1, 2]);
	expect(receipts(await queue.take(2))).toEqual([3]);
});

test('what was taken and not settled comes again before what was never taken', async () => {
	const queue = new SubscriberQueue();
	queue.add(messages(1, 6));
	const taken = await queue.take(4);
	queue.settle(taken.slice(1, 2));
	queue.again();
	expect(receipts(await queue.take(10))).toEqual([1, 3, 4, 5, 6]);
});

test('a message settled while it came again is not handed out', async () => {
	const queue = new SubscriberQueue();
	queue.add(messages(1, 2));
	const old = await queue.take(10);
	queue.clear();
	queue.add(messages(1, 3));
	queue.settle(old);
	expect(receipts(await queue.take(10))).toEqual([3]);
	expect(queue.size).toBe(1);
});

test('closing ends a waiting take with nothing', async () => {
	const queue = new SubscriberQueue();
	const taken = queue.take(5);
	queue.close();
	expect(await taken).toEqual([]);
	expect(await queue.take(5)).toEqual([]);
});
