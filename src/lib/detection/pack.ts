/**
 * Plain values as few bytes: JSON's types, bit for bit, at about a quarter of JSON's length.
 * Own code because the slow state must stay under 4 kB and a pure room has no compression;
 * floats that fit four bytes take four, known keys take one.
 */

/** Append only: a key's place is what is stored. */
const KEYS: readonly string[] =
	`revision state sinceMs confidence lastKnown atMs unknownWhy doubt reason evidence because against offset
	signs learning preCommissioned candidate reference returns strange arrival steps pending pendDeadlineMs echoes
	aisle refreshWhy slope settle closedUntilMs longCheckMs longAsked longStay stayNo lastPulseMs cap stays sampled
	entries j fromMs toMs newMs burst uncertaintyS settledMs gapS riseS peakMg clipped became before by byJ
	checkAfterMs step deadlineMs learnedAtMs fieldMg sigmaMg tempC offsetMg readings
	magnet baseline parted suspect back first differ`.split(/\s+/);
const KEY_INDEX = new Map(KEYS.map((key, index) => [key, index]));
const OTHER_KEY = 255;
/** Strings that can be named again by one byte. */
const MOST_SAID = 255;

const TAG = {
	null: 0,
	false: 1,
	true: 2,
	byte: 3,
	float: 4,
	double: 5,
	string: 6,
	array: 7,
	object: 8,
	time: 9,
	again: 10
} as const;

class Writer {
	private bytes = new Uint8Array(1024);
	private length = 0;
	/** Strings so far: evidence and kinds repeat themselves. */
	private readonly said = new Map<string, number>();

	private room(n: number): DataView {
		if (this.length + n > this.bytes.length) {
			const larger = new Uint8Array(2 * (this.length + n));
			larger.set(this.bytes);
			this.bytes = larger;
		}
		const view = new DataView(this.bytes.buffer, this.length, n);
		this.length += n;
		return view;
	}

	byte(v: number): void {
		this.room(1).setUint8(0, v);
	}

	text(v: string): void {
		const utf8 = new TextEncoder().encode(v);
		this.room(2).setUint16(0, utf8.length, true);
		const at = this.length;
		this.room(utf8.length);
		this.bytes.set(utf8, at);
	}

	number(v: number): void {
		if (Number.isInteger(v) && v >= 0 && v < 256 && !Object.is(v, -0)) {
			this.byte(TAG.byte);
			this.byte(v);
		} else if (Object.is(Math.fround(v), v)) {
			this.byte(TAG.float);
			this.room(4).setFloat32(0, v, true);
		} else if (Number.isInteger(v) && v > 0 && v < 2 ** 48) {
			this.byte(TAG.time);
			const view = this.room(6);
			view.setUint32(0, v % 2 ** 32, true);
			view.setUint16(4, Math.floor(v / 2 ** 32), true);
		} else {
			this.byte(TAG.double);
			this.room(8).setFloat64(0, v, true);
		}
	}

	value(v: unknown): void {
		if (v === null || v === undefined) this.byte(TAG.null);
		else if (typeof v === 'boolean') this.byte(v ? TAG.true : TAG.false);
		else if (typeof v === 'number') this.number(v);
		else if (typeof v === 'string') this.string(v);
		else if (Array.isArray(v)) {
			this.byte(TAG.array);
			this.room(2).setUint16(0, v.length, true);
			for (const item of v) this.value(item);
		} else this.object(v);
	}

	private string(v: string): void {
		const before = this.said.get(v);
		if (before !== undefined) {
			this.byte(TAG.again);
			this.byte(before);
			return;
		}
		if (this.said.size < MOST_SAID) this.said.set(v, this.said.size);
		this.byte(TAG.string);
		this.text(v);
	}

	private object(v: object): void {
		const entries = Object.entries(v).filter(([, item]) => item !== undefined);
		this.byte(TAG.object);
		this.byte(entries.length);
		for (const [key, item] of entries) {
			const index = KEY_INDEX.get(key);
			this.byte(index ?? OTHER_KEY);
			if (index === undefined) this.text(key);
			this.value(item);
		}
	}

	done(): Uint8Array {
		return this.bytes.slice(0, this.length);
	}
}

class Reader {
	private at = 0;
	private readonly view: DataView;
	private readonly said: string[] = [];

	constructor(private readonly bytes: Uint8Array) {
		this.view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
	}

	private skip(n: number): number {
		this.at += n;
		return this.at - n;
	}

	private text(): string {
		const length = this.view.getUint16(this.skip(2), true);
		const from = this.skip(length);
		return new TextDecoder().decode(this.bytes.subarray(from, from + length));
	}

	private key(): string {
		const index = this.view.getUint8(this.skip(1));
		return index === OTHER_KEY ? this.text() : (KEYS[index] ?? '');
	}

	private time(): number {
		const low = this.view.getUint32(this.skip(4), true);
		return low + 2 ** 32 * this.view.getUint16(this.skip(2), true);
	}

	value(): unknown {
		switch (this.view.getUint8(this.skip(1))) {
			case TAG.false:
				return false;
			case TAG.true:
				return true;
			case TAG.byte:
				return this.view.getUint8(this.skip(1));
			case TAG.float:
				return this.view.getFloat32(this.skip(4), true);
			case TAG.double:
				return this.view.getFloat64(this.skip(8), true);
			case TAG.time:
				return this.time();
			case TAG.string: {
				const text = this.text();
				if (!this.said.includes(text)) this.said.push(text);
				return text;
			}
			case TAG.again:
				return this.said[this.view.getUint8(this.skip(1))] ?? '';
			case TAG.array: {
				const length = this.view.getUint16(this.skip(2), true);
				return Array.from({ length }, () => this.value());
			}
			case TAG.object: {
				const length = this.view.getUint8(this.skip(1));
				return Object.fromEntries(Array.from({ length }, () => [this.key(), this.value()]));
			}
			default:
				return null;
		}
	}
}

/** Plain data (null, booleans, numbers, strings, arrays, objects) as bytes; undefined members fall away. */
export function pack(value: unknown): Uint8Array {
	const writer = new Writer();
	writer.value(value);
	return writer.done();
}

/** The inverse of pack: numbers come back bit for bit. */
export function unpack(bytes: Uint8Array): unknown {
	return new Reader(bytes).value();
}
