/**
 * MQTT 3.1.1 control packets as bytes (OASIS standard, sections 2.2 and 3): just enough to find the
 * packets in a stream and to take a PUBLISH apart without building objects for it.
 */
export const PACKET = { connect: 1, publish: 3, puback: 4, pingreq: 12, disconnect: 14 } as const;

export const PINGRESP = Buffer.from([0xd0, 0x00]);

/** CONNACK without session, with the return code (section 3.2.2.3). */
export const connack = (returnCode: number): Buffer => Buffer.from([0x20, 0x02, 0x00, returnCode]);

/** PUBACKs of these message ids, in order, as one piece. */
export function pubacks(messageIds: readonly number[]): Buffer {
	const bytes = Buffer.allocUnsafe(messageIds.length * 4);
	let at = 0;
	for (const id of messageIds) {
		bytes[at] = 0x40;
		bytes[at + 1] = 0x02;
		bytes[at + 2] = id >>> 8;
		bytes[at + 3] = id & 0xff;
		at += 4;
	}
	return bytes;
}

export type Found = 'whole' | 'partial' | 'too_large' | 'malformed';

/** Walks the packets of a buffer; one instance is used again and again, so a packet costs no allocation. */
export class PacketCursor {
	type = 0;
	flags = 0;
	bodyAt = 0;
	/** First byte after the packet; set for 'partial' too as soon as the length is known, else -1. */
	endAt = -1;

	find(bytes: Uint8Array, at: number, maxBytes: number): Found {
		this.endAt = -1;
		const first = bytes[at];
		if (first === undefined) return 'partial';
		this.type = first >>> 4;
		this.flags = first & 0x0f;
		let length = 0;
		for (let i = 0; i < 4; i++) {
			const digit = bytes[at + 1 + i];
			if (digit === undefined) return 'partial';
			length += (digit & 0x7f) << (7 * i);
			if ((digit & 0x80) !== 0) continue;
			if (length > maxBytes) return 'too_large';
			this.bodyAt = at + 2 + i;
			this.endAt = this.bodyAt + length;
			return this.endAt <= bytes.length ? 'whole' : 'partial';
		}
		return 'malformed';
	}
}

/** The parts of a PUBLISH body as offsets; false when its own lengths contradict each other. */
export class PublishParts {
	qos = 0;
	messageId = 0;
	topicAt = 0;
	topicEnd = 0;
	payloadAt = 0;

	read(bytes: Uint8Array, flags: number, bodyAt: number, endAt: number): boolean {
		this.qos = (flags >>> 1) & 0x03;
		if (bodyAt + 2 > endAt || this.qos === 3) return false;
		this.topicAt = bodyAt + 2;
		this.topicEnd = this.topicAt + (bytes[bodyAt]! << 8) + bytes[bodyAt + 1]!;
		this.payloadAt = this.topicEnd + (this.qos === 0 ? 0 : 2);
		if (this.payloadAt > endAt || this.topicEnd === this.topicAt) return false;
		this.messageId = this.qos === 0 ? 0 : (bytes[this.topicEnd]! << 8) + bytes[this.topicEnd + 1]!;
		return this.qos === 0 || this.messageId !== 0;
	}
}

/** Protocol name 'MQTT' and level 4 of a CONNECT body (section 3.1.2.2); anything else gets return code 1. */
export function isLevel4(bytes: Uint8Array, bodyAt: number, endAt: number): boolean {
	const head = [0x00, 0x04, 0x4d, 0x51, 0x54, 0x54, 0x04];
	return endAt - bodyAt >= 10 && head.every((byte, i) => bytes[bodyAt + i] === byte);
}
