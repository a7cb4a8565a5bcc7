/**
 * A strict CBOR reader (RFC 8949) for what protocol.md, 'Envelope', allows: integers, byte and text
 * strings, arrays, maps with integer or text keys, false, true, null, undefined. It refuses floats,
 * indefinite lengths, duplicate keys, other simple values, invalid UTF-8, bytes left over.
 *
 * Own code because the CBOR packages at hand are made to accept: they read floats, duplicate keys and
 * indefinite lengths without a word, so a second structural walk would be needed anyway.
 */
export type CborKey = number | bigint | string;
export type CborValue =
	number | bigint | string | boolean | null | undefined | Uint8Array | CborValue[] | CborMap;
export type CborMap = Map<CborKey, CborValue>;

/** Thrown inside the wire room only; every opener turns it into a refusal. */
export class Malformed extends Error {}

/** Nesting that no frame needs; keeps hostile bytes from deep recursion. */
const MAX_DEPTH = 8;
const TWO_32 = 0x1_0000_0000;
const utf8 = new TextDecoder('utf-8', { fatal: true, ignoreBOM: true });

export class CborReader {
	pos = 0;
	constructor(readonly bytes: Uint8Array) {}

	/** Major type (0..7) of the next item, without consuming it. */
	peekMajor(): number {
		return this.byteAt(this.pos) >> 5;
	}

	/** Reads the argument of a head that must have the given major type. Lengths are always < 2^53. */
	length(major: number, what: string): number {
		if (this.peekMajor() !== major) throw new Malformed(`${what} expected`);
		const argument = this.argument();
		if (typeof argument === 'bigint') throw new Malformed('length too large');
		return argument;
	}

	byteString(what: string): Uint8Array {
		return this.take(this.length(2, what));
	}

	/** Any item that the protocol allows. */
	value(depth = 0): CborValue {
		if (depth > MAX_DEPTH) throw new Malformed('nested too deeply');
		switch (this.peekMajor()) {
			case 0:
				return this.argument();
			case 1:
				return negative(this.argument());
			case 2:
				return this.byteString('byte string');
			case 3:
				return this.text();
			case 4:
				return this.array(depth);
			case 5:
				return this.map(depth);
			case 6:
				throw new Malformed('tag not allowed');
			default:
				return this.simple();
		}
	}

	map(depth: number): CborMap {
		const entries = this.length(5, 'map');
		const map: CborMap = new Map();
		for (let i = 0; i < entries; i++) {
			const key = this.value(depth + 1);
			if (typeof key !== 'number' && typeof key !== 'string' && typeof key !== 'bigint')
				throw new Malformed('map key is neither integer nor text');
			if (map.has(key)) throw new Malformed(`duplicate key ${key}`);
			map.set(key, this.value(depth + 1));
		}
		return map;
	}

	end(): void {
		if (this.pos !== this.bytes.length) throw new Malformed('bytes left over');
	}

	private byteAt(index: number): number {
		const byte = this.bytes[index];
		if (byte === undefined) throw new Malformed('ends too early');
		return byte;
	}

	/** The head's argument; a bigint only beyond 2^53 - 1. */
	argument(): number | bigint {
		const additional = this.byteAt(this.pos++) & 31;
		if (additional < 24) return additional;
		if (additional > 27)
			throw new Malformed(additional === 31 ? 'indefinite length' : 'reserved head');
		const size = 1 << (additional - 24);
		const at = this.pos;
		this.pos += size;
		if (this.pos > this.bytes.length) throw new Malformed('ends too early');
		if (size < 8) return this.unsigned(at, size);
		const high = this.unsigned(at, 4);
		const low = this.unsigned(at + 4, 4);
		return high < 0x20_0000 ? high * TWO_32 + low : (BigInt(high) << 32n) | BigInt(low);
	}

	private unsigned(at: number, size: number): number {
		let value = 0;
		for (let i = at; i < at + size; i++) value = value * 256 + this.byteAt(i);
		return value;
	}

	private take(length: number): Uint8Array {
		const from = this.pos;
		if (length > this.bytes.length - from) throw new Malformed('ends too early');
		this.pos = from + length;
		return this.bytes.subarray(from, this.pos);
	}

	private text(): string {
		const bytes = this.take(this.length(3, 'text'));
		try {
			return utf8.decode(bytes);
		} catch {
			throw new Malformed('text is not UTF-8');
		}
	}

	private array(depth: number): CborValue[] {
		const length = this.length(4, 'array');
		const items: CborValue[] = [];
		for (let i = 0; i < length; i++) items.push(this.value(depth + 1));
		return items;
	}

	private simple(): boolean | null | undefined {
		switch (this.byteAt(this.pos++)) {
			case 0xf4:
				return false;
			case 0xf5:
				return true;
			case 0xf6:
				return null;
			case 0xf7:
				return undefined;
			case 0xf9:
			case 0xfa:
			case 0xfb:
				throw new Malformed('float not allowed');
			default:
				throw new Malformed('simple value not allowed');
		}
	}
}

function negative(argument: number | bigint): number | bigint {
	if (typeof argument === 'number' && argument < Number.MAX_SAFE_INTEGER) return -1 - argument;
	return -1n - BigInt(argument);
}

/** One whole item; throws Malformed. */
export function readWhole(bytes: Uint8Array): CborValue {
	const reader = new CborReader(bytes);
	const value = reader.value();
	reader.end();
	return value;
}
