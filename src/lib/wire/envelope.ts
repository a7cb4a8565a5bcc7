import { createHmac } from 'node:crypto';
import { Malformed } from './cbor-read';
import { pushHead } from './cbor-write';
import { macInput, mac0Tag, readMac0, sameTag, type Mac0 } from './cose-mac0';
import type { Refusal } from './types';

/** The two algorithms of protocol.md, 'Envelope': 4 = HMAC 256/64, 5 = HMAC 256/256. */
export type FrameAlg = 4 | 5;

export type Envelope =
	{ ok: true; payload: Uint8Array } | { ok: false; reason: Refusal; detail: string };

/** Protocol, 'What the server does', step 1. */
export const MAX_MESSAGE_BYTES = 4096;

const encoder = new TextEncoder();

/** The algorithm where the headers are exactly what the protocol writes, else null. */
function frameAlg({ protectedBytes, unprotected }: Mac0): FrameAlg | null {
	if (unprotected.size !== 0 || protectedBytes.length !== 3) return null;
	if (protectedBytes[0] !== 0xa1 || protectedBytes[1] !== 0x01) return null;
	const alg = protectedBytes[2];
	return alg === 4 || alg === 5 ? alg : null;
}

function parts(bytes: Uint8Array): Mac0 | string {
	try {
		return readMac0(bytes);
	} catch (error) {
		if (error instanceof Malformed) return error.message;
		throw error;
	}
}

/**
 * Opens the envelope of a node's message in either direction. The tag is judged before the payload is
 * read. Several keys: during a key's overlap both are good.
 */
export function openEnvelope(
	topic: string,
	bytes: Uint8Array,
	keys: readonly Uint8Array[]
): Envelope {
	if (bytes.length > MAX_MESSAGE_BYTES)
		return { ok: false, reason: 'too_large', detail: `${bytes.length} bytes` };
	const mac0 = parts(bytes);
	if (typeof mac0 === 'string') return { ok: false, reason: 'not_decodable', detail: mac0 };
	const alg = frameAlg(mac0);
	if (alg === null)
		return { ok: false, reason: 'not_decodable', detail: 'header is not {1: 4} or {1: 5}' };
	const input = macInput(mac0.protectedBytes, encoder.encode(topic), mac0.payload);
	for (const key of keys) {
		if (sameTag(mac0Tag(alg, key, input), mac0.tag)) return { ok: true, payload: mac0.payload };
	}
	return { ok: false, reason: 'bad_tag', detail: `no key of ${keys.length} fits` };
}

/** Seals a payload for a topic, untagged. */
export function sealEnvelope(
	topic: string,
	payload: Uint8Array,
	key: Uint8Array,
	alg: FrameAlg
): Uint8Array {
	const header = Uint8Array.of(0xa1, 0x01, alg);
	const tag = mac0Tag(alg, key, macInput(header, encoder.encode(topic), payload));
	const payloadHead: number[] = [];
	pushHead(payloadHead, 2, payload.length);
	const tagHead: number[] = [];
	pushHead(tagHead, 2, tag.length);
	return new Uint8Array(
		Buffer.concat([
			Uint8Array.of(0x84, 0x43, ...header, 0xa0, ...payloadHead),
			payload,
			Uint8Array.from(tagHead),
			tag
		])
	);
}

/** A node's MQTT password (protocol, 'Transport'): the key itself never crosses the network. */
export function mqttPassword(key: Uint8Array): string {
	return createHmac('sha256', key).update('lodekeep mqtt 1').digest('hex');
}
