import fc from 'fast-check';
import { expect, test } from 'vitest';
import { HeldList, NodeQueue, type AnswerPort, type Held } from './held-list';

class Port implements AnswerPort {
	readonly ids: number[] = [];
	answer(messageId: number): void {
		this.ids.push(messageId);
	}
	flush(): void {
		// Nothing is written here.
	}
}

const FIRST = 1_000_000;
const made = (queue: NodeQueue, port: AnswerPort | null, messageId: number, text = ''): Held => ({
	receipt: 0,
	queue,
	port,
	messageId,
	topic: Buffer.from('t'),
	payload: Buffer.from(text),
	arrivedAtMs: 0,
	promised: true,
	costBytes: 10,
	settled: false
});

function answer(queues: Set<NodeQueue>): void {
	for (const queue of queues) queue.answer(new Set());
}

test('whatever the order of receipts, each node is answered in order of arrival and everything once', () => {
	fc.assert(
		fc.property(
			fc.array(fc.integer({ min: 0, max: 2 }), { minLength: 1, maxLength: 200 }),
			fc.infiniteStream(fc.nat()),
			(arrivals, luck) => {
				const list = new HeldList(FIRST);
				const nodes = [0, 1, 2].map((i) => ({ queue: new NodeQueue(`N${i}`), port: new Port() }));
				arrivals.forEach((i, n) => list.add(made(nodes[i]!.queue, nodes[i]!.port, n + 1)));
				const receipts = arrivals.map((_, n) => FIRST + n);
				while (receipts.length > 0) {
					const at = luck.next().value! % receipts.length;
					const queues = new Set<NodeQueue>();
					list.settle(receipts.splice(at, 1)[0]!, 1, queues);
					answer(queues);
				}
				nodes.forEach(({ port }, i) => {
					const expected = arrivals.flatMap((node, n) => (node === i ? [n + 1] : []));
					expect(port.ids).toEqual(expected);
				});
				expect(list).toMatchObject({ size: 0, bytes: 0 });
			}
		)
	);
});

test('a rewind gives all that is held again in order, before anything new', () => {
	const list = new HeldList(FIRST);
	const queue = new NodeQueue('N');
	for (let id = 1; id <= 10; id++) list.add(made(queue, null, id));
	expect(list.take(6, 1e9)).toHaveLength(6);
	list.settle(FIRST + 1, 2, new Set());
	expect(list.ahead).toBe(4);
	list.rewind();
	list.add(made(queue, null, 11));
	expect(list.take(100, 1e9).map((held) => held.messageId)).toEqual([1, 4, 5, 6, 7, 8, 9, 10, 11]);
});

test('receipts stay right while tens of thousands pass through', () => {
	const list = new HeldList(FIRST);
	const queue = new NodeQueue('N');
	const port = new Port();
	let next = FIRST;
	for (let round = 0; round < 50; round++) {
		for (let i = 0; i < 1_000; i++) list.add(made(queue, port, round * 1_000 + i));
		const taken = list.take(700, 1e9);
		expect(taken[0]!.receipt).toBe(next);
		next += taken.length;
		const queues = new Set<NodeQueue>();
		list.settle(taken[0]!.receipt, taken.length, queues);
		answer(queues);
	}
	expect(port.ids).toEqual(Array.from({ length: 35_000 }, (_, i) => i));
	expect(list.size).toBe(15_000);
	expect(list.bytes).toBe(150_000);
});

test('receipts that fit no message change nothing', () => {
	const list = new HeldList(FIRST);
	list.add(made(new NodeQueue('N'), null, 1));
	const queues = new Set<NodeQueue>();
	list.settle(FIRST - 500, 400, queues);
	list.settle(FIRST + 1, 1_000, queues);
	list.settle(Number.NaN, 5, queues);
	expect(queues.size).toBe(0);
	expect(list.size).toBe(1);
});

test('what a node sends again after a reconnect is not held twice, and is answered by its new id', () => {
	const list = new HeldList(FIRST);
	const queue = new NodeQueue('N');
	const [before, after] = [new Port(), new Port()];
	for (const text of ['a', 'b', 'c']) list.add(made(queue, before, 7, text));
	queue.orphan(before);
	const topic = Buffer.from('t');
	expect(queue.adopt(after, 1, topic, Buffer.from('a'))).toBe(true);
	expect(queue.adopt(after, 2, topic, Buffer.from('b'))).toBe(true);
	expect(queue.adopt(after, 9, topic, Buffer.from('new'))).toBe(false);
	expect(queue.adopt(after, 9, Buffer.from('u'), Buffer.from('c'))).toBe(false);
	const queues = new Set<NodeQueue>();
	list.settle(FIRST, 3, queues);
	answer(queues);
	expect(before.ids).toEqual([]);
	expect(after.ids).toEqual([1, 2]);
	expect(queue).toMatchObject({ size: 0, bytes: 0, orphans: 0 });
});

test('two equal messages are adopted as two', () => {
	const queue = new NodeQueue('N');
	const list = new HeldList(FIRST);
	const [before, after] = [new Port(), new Port()];
	list.add(made(queue, before, 1, 'same'));
	list.add(made(queue, before, 2, 'same'));
	queue.orphan(before);
	const again = () => queue.adopt(after, 1, Buffer.from('t'), Buffer.from('same'));
	expect([again(), again(), again()]).toEqual([true, true, false]);
});
