import type { Held } from './held-list';

/**
 * What goes over the app's own link, both ends. Binary where every message passes, JSON elsewhere.
 * A batch: version u8, first receipt f64, arrival base f64 (ms), count u32, then per message
 * receipt delta u32, arrival delta i32 (ms), promised u8, topic length u16, payload length u32, topic, payload.
 */
export const LINK_USER = 'lodekeep-app';
export const LINK_TOPIC = {
	held: 'lodekeep/link/held',
	receipt: 'lodekeep/link/receipt',
	directory: 'lodekeep/link/directory',
	stats: 'lodekeep/link/stats',
	networks: 'lodekeep/link/networks'
} as const;
const VERSION = 1;
const HEAD_BYTES = 21;
const ITEM_BYTES = 15;

export interface CarriedMessage {
	receipt: number;
	topic: string;
	bytes: Buffer;
	arrivedAtMs: number;
	promised: boolean;
}

export function encodeBatch(batch: readonly Held[]): Buffer {
	let length = HEAD_BYTES;
	for (const held of batch) length += ITEM_BYTES + held.topic.length + held.payload.length;
	const out = Buffer.allocUnsafe(length);
	const first = batch[0];
	out[0] = VERSION;
	out.writeDoubleBE(first?.receipt ?? 0, 1);
	out.writeDoubleBE(first?.arrivedAtMs ?? 0, 9);
	out.writeUInt32BE(batch.length, 17);
	let at = HEAD_BYTES;
	for (const held of batch) {
		out.writeUInt32BE(held.receipt - first!.receipt, at);
		out.writeInt32BE(held.arrivedAtMs - first!.arrivedAtMs, at + 4);
		out[at + 8] = held.promised ? 1 : 0;
		out.writeUInt16BE(held.topic.length, at + 9);
		out.writeUInt32BE(held.payload.length, at + 11);
		at += ITEM_BYTES;
		at += held.topic.copy(out, at);
		at += held.payload.copy(out, at);
	}
	return out;
}

/** null when the bytes are of another version or broken: then the two ends are of different builds. */
export function decodeBatch(bytes: Buffer): CarriedMessage[] | null {
	if (bytes.length < HEAD_BYTES || bytes[0] !== VERSION) return null;
	const firstReceipt = bytes.readDoubleBE(1);
	const firstArrivedMs = bytes.readDoubleBE(9);
	const count = bytes.readUInt32BE(17);
	const batch: CarriedMessage[] = [];
	let at = HEAD_BYTES;
	for (let i = 0; i < count; i++) {
		if (at + ITEM_BYTES > bytes.length) return null;
		const topicEnd = at + ITEM_BYTES + bytes.readUInt16BE(at + 9);
		const payloadEnd = topicEnd + bytes.readUInt32BE(at + 11);
		if (payloadEnd > bytes.length) return null;
		batch.push({
			receipt: firstReceipt + bytes.readUInt32BE(at),
			arrivedAtMs: firstArrivedMs + bytes.readInt32BE(at + 4),
			promised: bytes[at + 8] === 1,
			topic: bytes.toString('utf8', at + ITEM_BYTES, topicEnd),
			bytes: bytes.subarray(topicEnd, payloadEnd)
		});
		at = payloadEnd;
	}
	return batch;
}

/** Receipts as runs `[from, count]`: a batch settled whole is one run of 12 bytes. */
export function encodeReceipts(receipts: readonly number[]): Buffer {
	const runs: { from: number; count: number }[] = [];
	for (const receipt of receipts) {
		const last = runs.at(-1);
		if (last !== undefined && last.from + last.count === receipt) last.count++;
		else runs.push({ from: receipt, count: 1 });
	}
	const out = Buffer.allocUnsafe(runs.length * 12);
	runs.forEach((run, i) => {
		out.writeDoubleBE(run.from, i * 12);
		out.writeUInt32BE(run.count, i * 12 + 8);
	});
	return out;
}

export function decodeReceipts(bytes: Buffer): { from: number; count: number }[] {
	const runs = [];
	for (let at = 0; at + 12 <= bytes.length; at += 12) {
		runs.push({ from: bytes.readDoubleBE(at), count: bytes.readUInt32BE(at + 8) });
	}
	return runs;
}
