import fc from 'fast-check';
import { expect, test } from 'vitest';
import { NodeQueue, type Held } from './held-list';
import { decodeBatch, decodeReceipts, encodeBatch, encodeReceipts } from './link-codec';

const BASE_MS = 1_700_000_000_000;
const queue = new NodeQueue('N');
const heldOf = (delta: number, topic: string, payload: Uint8Array, promised: boolean): Held => ({
	receipt: BASE_MS * 1_000 + delta,
	queue,
	port: null,
	messageId: 1,
	topic: Buffer.from(topic),
	payload: Buffer.from(payload),
	arrivedAtMs: BASE_MS - delta,
	promised,
	costBytes: 1,
	settled: false
});
const item = fc.tuple(fc.string({ minLength: 1 }), fc.uint8Array({ maxLength: 300 }), fc.boolean());

test('a batch reads back as it was written', () => {
	fc.assert(
		fc.property(fc.array(item, { maxLength: 20 }), (items) => {
			const batch = items.map(([topic, payload, promised], i) =>
				heldOf(i * 3, topic, payload, promised)
			);
			const back = decodeBatch(encodeBatch(batch));
			expect(back).toEqual(
				batch.map(({ receipt, topic, payload, arrivedAtMs, promised }) => ({
					receipt,
					topic: topic.toString('utf8'),
					bytes: payload,
					arrivedAtMs,
					promised
				}))
			);
		})
	);
});

test('a batch cut short or of another version is refused', () => {
	const bytes = encodeBatch([heldOf(0, 'topic', Buffer.from('payload'), true)]);
	for (let length = 0; length < bytes.length; length++) {
		expect(decodeBatch(bytes.subarray(0, length))).toBeNull();
	}
	const other = Buffer.from(bytes);
	other[0] = 99;
	expect(decodeBatch(other)).toBeNull();
});

test('receipts travel as runs and lose nothing', () => {
	fc.assert(
		fc.property(fc.uniqueArray(fc.integer({ min: 0, max: 2 ** 53 - 1_000 })), (receipts) => {
			const back = decodeReceipts(encodeReceipts(receipts)).flatMap(({ from, count }) =>
				Array.from({ length: count }, (_, i) => from + i)
			);
			expect(back).toEqual(receipts);
		})
	);
	const run = Array.from({ length: 4_000 }, (_, i) => BASE_MS * 1_000 + i);
	expect(encodeReceipts(run)).toHaveLength(12);
});
