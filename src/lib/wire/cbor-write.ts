/**
 * Deterministic CBOR (RFC 8949, section 4.2.1): shortest heads, definite lengths, map entries in the
 * order given. Own code because it is the twin of the strict
 * reader: what the protocol forbids (floats, tags, indefinite lengths) can't be written by mistake.
 */
export type Writable =
	number | string | Uint8Array | readonly Writable[] | ReadonlyMap<number | string, Writable>;

/** Appends the head of an item: major type 0..7 and an argument of 0 to 2^53 - 1. */
export function pushHead(out: number[], major: number, argument: number): void {
	const top = major << 5;
	if (argument < 24) out.push(top | argument);
	else if (argument < 0x100) out.push(top | 24, argument);
	else if (argument < 0x1_0000) out.push(top | 25, argument >> 8, argument & 255);
	else if (argument < 0x1_0000_0000) {
		out.push(top | 26);
		pushUint32(out, argument);
	} else {
		out.push(top | 27);
		pushUint32(out, Math.floor(argument / 0x1_0000_0000));
		pushUint32(out, argument % 0x1_0000_0000);
	}
}

function pushUint32(out: number[], value: number): void {
	out.push((value >>> 24) & 255, (value >>> 16) & 255, (value >>> 8) & 255, value & 255);
}

function push(out: number[], value: Writable): void {
	if (typeof value === 'number') {
		if (!Number.isSafeInteger(value)) throw new TypeError(`not an integer: ${value}`);
		if (value >= 0) pushHead(out, 0, value);
		else pushHead(out, 1, -1 - value);
	} else if (typeof value === 'string') {
		const bytes = new TextEncoder().encode(value);
		pushHead(out, 3, bytes.length);
		for (const byte of bytes) out.push(byte);
	} else if (value instanceof Uint8Array) {
		pushHead(out, 2, value.length);
		for (const byte of value) out.push(byte);
	} else if (value instanceof Map) {
		pushHead(out, 5, value.size);
		for (const [key, item] of value as ReadonlyMap<number | string, Writable>) {
			push(out, key);
			push(out, item);
		}
	} else {
		const items = value as readonly Writable[];
		pushHead(out, 4, items.length);
		for (const item of items) push(out, item);
	}
}

/** Throws TypeError for what is no integer: a bug of the caller, never input. */
export function writeCbor(value: Writable): Uint8Array {
	const out: number[] = [];
	push(out, value);
	return Uint8Array.from(out);
}
