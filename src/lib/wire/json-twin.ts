import type { CborMap, CborValue } from './cbor-read';
import { KEY, Refused, type FieldName } from './fields';

/** Protocol, 'JSON twin': a message whose first byte is `{`. */
export const isJson = (bytes: Uint8Array): boolean => bytes[0] === 0x7b;

const utf8 = new TextDecoder('utf-8', { fatal: true });
const NAMES = new Set<string>(Object.keys(KEY));
const HEX_ID = /^[0-9a-f]{16}$/i;

function parse(bytes: Uint8Array): unknown {
	try {
		return JSON.parse(utf8.decode(bytes)) as unknown;
	} catch {
		throw new Refused('not_decodable', 'not JSON');
	}
}

/** JSON values as the CBOR reader would give them; null counts as a wrong type, as in CBOR. */
function asCbor(value: unknown): CborValue {
	if (Array.isArray(value)) return value.map(asCbor);
	if (typeof value === 'object' && value !== null)
		return new Map(Object.entries(value).map(([key, item]) => [key, asCbor(item)]));
	return value as number | string | boolean | null;
}

function idBytes(value: unknown): Uint8Array {
	if (typeof value !== 'string' || !HEX_ID.test(value))
		throw new Refused('wrong_type', 'command is not 16 hex digits');
	return Uint8Array.from(Buffer.from(value, 'hex'));
}

/** The fields of a JSON message under their protocol keys; names that are not the protocol's are ignored. */
export function jsonFields(bytes: Uint8Array): CborMap {
	const message = parse(bytes);
	const map: CborMap = new Map();
	for (const [name, value] of Object.entries(message as Record<string, unknown>)) {
		if (!NAMES.has(name)) continue;
		map.set(KEY[name as FieldName], name === 'command' ? idBytes(value) : asCbor(value));
	}
	return map;
}
