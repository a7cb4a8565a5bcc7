import { createHmac, timingSafeEqual } from 'node:crypto';
import { CborReader, Malformed, readWhole, type CborMap, type CborValue } from './cbor-read';

/** HMAC of COSE (RFC 9053, table 7) by algorithm id; 256/64 is HMAC-SHA-256 cut to its first 8 bytes. */
const HMAC = {
	4: { hash: 'sha256', tagBytes: 8 },
	5: { hash: 'sha256', tagBytes: 32 },
	6: { hash: 'sha384', tagBytes: 48 },
	7: { hash: 'sha512', tagBytes: 64 }
} as const;
export type HmacAlg = keyof typeof HMAC;

const COSE_MAC0_TAG = 17;
const ALG_HEADER = 1;
const MAX_HEAD = 9;
const STRUCTURE_START = Uint8Array.of(0x84, 0x64, 0x4d, 0x41, 0x43, 0x30); // ["MAC0", …

export interface Mac0 {
	protectedBytes: Uint8Array;
	unprotected: CborMap;
	payload: Uint8Array;
	tag: Uint8Array;
}

/** Reads the four parts of a COSE_Mac0 (RFC 9052, section 6.2), tagged 17 or untagged; throws Malformed. */
export function readMac0(bytes: Uint8Array): Mac0 {
	const reader = new CborReader(bytes);
	if (reader.peekMajor() === 6 && reader.argument() !== COSE_MAC0_TAG)
		throw new Malformed('tag is not 17');
	if (reader.length(4, 'array') !== 4) throw new Malformed('not four parts');
	const protectedBytes = reader.byteString('protected header');
	const unprotected = reader.map(0);
	const payload = reader.byteString('payload');
	const tag = reader.byteString('tag');
	reader.end();
	return { protectedBytes, unprotected, payload, tag };
}

function writeByteString(into: Uint8Array, at: number, bytes: Uint8Array): number {
	const n = bytes.length;
	if (n < 24) into[at++] = 0x40 | n;
	else if (n < 0x100) {
		into[at++] = 0x58;
		into[at++] = n;
	} else if (n < 0x1_0000) {
		into[at++] = 0x59;
		into[at++] = n >> 8;
		into[at++] = n & 255;
	} else {
		into[at++] = 0x5a;
		for (let shift = 24; shift >= 0; shift -= 8) into[at++] = (n >>> shift) & 255;
	}
	into.set(bytes, at);
	return at + n;
}

/** The bytes under the MAC: CBOR of ["MAC0", protected, external_aad, payload]. An empty map counts as h''. */
export function macInput(
	protectedBytes: Uint8Array,
	externalAad: Uint8Array,
	payload: Uint8Array
): Uint8Array {
	const header =
		protectedBytes.length === 1 && protectedBytes[0] === 0xa0 ? new Uint8Array(0) : protectedBytes;
	const room =
		STRUCTURE_START.length + header.length + externalAad.length + payload.length + 3 * MAX_HEAD;
	const into = Buffer.allocUnsafe(room);
	into.set(STRUCTURE_START);
	let at = writeByteString(into, STRUCTURE_START.length, header);
	at = writeByteString(into, at, externalAad);
	at = writeByteString(into, at, payload);
	return into.subarray(0, at);
}

export function mac0Tag(alg: HmacAlg, key: Uint8Array, input: Uint8Array): Uint8Array {
	const { hash, tagBytes } = HMAC[alg];
	const digest = createHmac(hash, key).update(input).digest();
	return digest.length === tagBytes ? digest : digest.subarray(0, tagBytes);
}

/** Compares in constant time; the length of a tag is no secret. */
export function sameTag(expected: Uint8Array, tag: Uint8Array): boolean {
	return expected.length === tag.length && timingSafeEqual(expected, tag);
}

function algOf(parts: Mac0): CborValue {
	if (parts.protectedBytes.length > 0) {
		const header = readWhole(parts.protectedBytes);
		if (!(header instanceof Map)) throw new Malformed('protected header is no map');
		if (header.has(ALG_HEADER)) return header.get(ALG_HEADER);
	}
	return parts.unprotected.get(ALG_HEADER);
}

/**
 * Verifies any COSE_Mac0 with an HMAC algorithm, wherever RFC 9052 lets the algorithm stand. The payload,
 * or null when it does not verify. Frames of nodes go through the narrower `openEnvelope`.
 */
export function openMac0(
	bytes: Uint8Array,
	key: Uint8Array,
	externalAad: Uint8Array
): Uint8Array | null {
	try {
		const parts = readMac0(bytes);
		const alg = algOf(parts);
		if (alg !== 4 && alg !== 5 && alg !== 6 && alg !== 7) return null;
		const input = macInput(parts.protectedBytes, externalAad, parts.payload);
		return sameTag(mac0Tag(alg, key, input), parts.tag) ? parts.payload : null;
	} catch (error) {
		if (error instanceof Malformed) return null;
		throw error;
	}
}
