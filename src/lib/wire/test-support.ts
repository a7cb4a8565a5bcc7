import { writeCbor, type Writable } from './cbor-write';
import { sealEnvelope } from './envelope';

/** Shared by the wire tests. */
export const hex = (text: string): Uint8Array => Uint8Array.from(Buffer.from(text, 'hex'));
export const toHex = (bytes: Uint8Array): string => Buffer.from(bytes).toString('hex');

/** Key of the protocol's test vector. */
export const KEY = Uint8Array.from({ length: 32 }, (_, i) => i);
export const RANGE = { min: -131_072, max: 131_071 };
export const OPTS = { unsignedAllowed: false, rangeCounts: RANGE };
export const UNSIGNED = { unsignedAllowed: true, rangeCounts: RANGE };
export const ID = Uint8Array.of(1, 2, 3, 4, 5, 6, 7, 8);

/** Seals any payload, to try what an honest encoder would not write. */
export const sealed = (topic: string, fields: [number | string, Writable][]): Uint8Array =>
	sealEnvelope(topic, writeCbor(new Map(fields)), KEY, 5);
