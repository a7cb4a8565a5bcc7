import { pack, unpack } from './pack';
import { Fast, newSlow, type Slow } from './state';

/** First byte of every stored state; a change of what is stored takes a new number. */
export const LAYOUT = 1;

/** Times as float64: exact for ms. */
const TIMES = [
	'lastAtMs',
	'boxFromMs',
	'openOldAtMs',
	'openNewAtMs',
	'crossAtMs',
	'crossOldAtMs',
	'quietUntilMs',
	'clippedFromMs',
	'checkAtMs',
	'nextHourMs',
	'decidedAtMs',
	'visibleAtMs'
] as const satisfies readonly (keyof Fast)[];
/** Held in float32 by Math.fround wherever they are set. */
const FLOATS = [
	'tempC',
	'baselineTempC',
	'stayMg',
	'peakMg',
	'passMg'
] as const satisfies readonly (keyof Fast)[];
const COUNTS = ['boxN', 'levelN', 'openN', 'polarity'] as const satisfies readonly (keyof Fast)[];
const BYTES = [
	'passN',
	'rebase',
	'open',
	'openGap',
	'openClipped',
	'openLow',
	'clippedRun',
	'reanchor'
] as const satisfies readonly (keyof Fast)[];

const VECTOR_BYTES = new Fast().buffer.byteLength;
const FAST_BYTES =
	1 + VECTOR_BYTES + 8 * TIMES.length + 4 * FLOATS.length + 4 * COUNTS.length + BYTES.length;

export function encodeFastState(fast: Fast): Uint8Array {
	const bytes = new Uint8Array(FAST_BYTES);
	const to = new DataView(bytes.buffer);
	bytes[0] = LAYOUT;
	let at = 1;
	for (const v of fast.buffer) {
		to.setFloat32(at, v, true);
		at += 4;
	}
	for (const name of TIMES) {
		to.setFloat64(at, fast[name], true);
		at += 8;
	}
	for (const name of FLOATS) {
		to.setFloat32(at, fast[name], true);
		at += 4;
	}
	for (const name of COUNTS) {
		to.setInt32(at, fast[name], true);
		at += 4;
	}
	for (const name of BYTES) bytes[at++] = fast[name];
	return bytes;
}

function checkLayout(bytes: Uint8Array): void {
	if (bytes[0] !== LAYOUT) {
		throw new RangeError(
			`stored state has layout ${String(bytes[0])}, this detector reads ${LAYOUT.toString()}`
		);
	}
}

export function decodeFastState(bytes: Uint8Array): Fast {
	checkLayout(bytes);
	const fast = new Fast();
	const from = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
	let at = 1;
	for (let i = 0; i < fast.buffer.length; i++, at += 4) fast.buffer[i] = from.getFloat32(at, true);
	for (const name of TIMES) {
		fast[name] = from.getFloat64(at, true);
		at += 8;
	}
	for (const name of FLOATS) {
		fast[name] = from.getFloat32(at, true);
		at += 4;
	}
	for (const name of COUNTS) {
		fast[name] = from.getInt32(at, true);
		at += 4;
	}
	for (const name of BYTES) fast[name] = bytes[at++] ?? 0;
	return fast;
}

/** Slow state is packed (numbers come back bit for bit); the learning window and hours as floats. */
export function encodeSlowState(slow: Slow): Uint8Array {
	const { window, windowAtMs, hours, ...plain } = slow;
	const packed = pack(plain);
	const numbers = [...windowAtMs, ...hours.map((h) => h[0])];
	const floats = [...window, ...hours.flatMap((h) => h.slice(1))];
	const bytes = new Uint8Array(7 + packed.length + 8 * numbers.length + 4 * floats.length);
	const to = new DataView(bytes.buffer);
	bytes[0] = LAYOUT;
	to.setUint16(1, packed.length, true);
	to.setUint16(3, windowAtMs.length, true);
	to.setUint16(5, hours.length, true);
	bytes.set(packed, 7);
	let at = 7 + packed.length;
	for (const v of numbers) {
		to.setFloat64(at, v, true);
		at += 8;
	}
	for (const v of floats) {
		to.setFloat32(at, v, true);
		at += 4;
	}
	return bytes;
}

export function decodeSlowState(bytes: Uint8Array): Slow {
	checkLayout(bytes);
	const from = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
	const packedLength = from.getUint16(1, true);
	const readings = from.getUint16(3, true);
	const hours = from.getUint16(5, true);
	const plain = unpack(bytes.subarray(7, 7 + packedLength)) as Partial<Slow>;
	const slow: Slow = { ...newSlow(), ...plain };
	let at = 7 + packedLength;
	const time = (): number => from.getFloat64((at += 8) - 8, true);
	const float = (): number => from.getFloat32((at += 4) - 4, true);
	slow.windowAtMs = Array.from({ length: readings }, time);
	const hourAtMs = Array.from({ length: hours }, time);
	slow.window = Array.from({ length: 3 * readings }, float);
	slow.hours = hourAtMs.map((t) => [t, float(), float(), float(), float(), float()]);
	return slow;
}
