import { Malformed, type CborKey, type CborMap, type CborValue } from './cbor-read';
import type { BeforePulse, Counts3, Opened, Refusal } from './types';

/** Thrown inside the wire room only; the openers turn it into their result. */
export class Refused extends Error {
	constructor(
		readonly reason: Refusal,
		detail: string
	) {
		super(detail);
	}
}

/** Runs a reader over untrusted fields; what it refuses becomes a result, anything else is a bug. */
export function attempt<T>(read: () => T): Opened<T> {
	try {
		return { ok: true, frame: read() };
	} catch (error) {
		if (error instanceof Refused) return { ok: false, reason: error.reason, detail: error.message };
		if (error instanceof Malformed)
			return { ok: false, reason: 'not_decodable', detail: error.message };
		throw error;
	}
}

/** Names and keys of protocol.md's table; the JSON twin uses the names. */
export const KEY = {
	boot: 1,
	seq: 2,
	t: 3,
	rows: 4,
	polarity: 5,
	temp: 6,
	battery: 7,
	rssi: 8,
	set: 9,
	reset: 10,
	command: 11,
	firmware: 12,
	profile: 13,
	cause: 14,
	outcome: 15,
	reason: 16,
	verb: 17,
	args: 18,
	expires: 19,
	before: 20,
	after: 21,
	pulse: 22,
	sent: 23,
	temps: 24,
	habit: 25,
	tx: 26
} as const;
export type FieldName = keyof typeof KEY;

export interface Limits {
	min: number;
	max: number;
}
export const UINT32: Limits = { min: 0, max: 0xffff_ffff };
export const UINT53: Limits = { min: 0, max: Number.MAX_SAFE_INTEGER };
/** What a reading's columns hold; wider values are no temperature, voltage or signal strength. */
export const INT16: Limits = { min: -0x8000, max: 0x7fff };
export const UINT16: Limits = { min: 0, max: 0xffff };
const INT31: Limits = { min: 0, max: 0x7fff_ffff };

export function integer(value: CborValue, name: string, { min, max }: Limits): number {
	if (typeof value === 'bigint') throw new Refused('out_of_range', `${name} ${value}`);
	if (typeof value !== 'number' || !Number.isInteger(value))
		throw new Refused('wrong_type', `${name} is no integer`);
	if (value < min || value > max) throw new Refused('out_of_range', `${name} ${value}`);
	return value;
}

export function list(value: CborValue, name: string, length?: number): readonly CborValue[] {
	if (!Array.isArray(value)) throw new Refused('wrong_type', `${name} is no array`);
	if (length !== undefined && value.length !== length)
		throw new Refused('wrong_type', `${name} has ${value.length} items, not ${length}`);
	return value;
}

/** Text cut to what is kept of it: a long firmware name must not cost the message. */
export function textOf(value: CborValue, name: string, maxChars: number): string {
	if (typeof value !== 'string') throw new Refused('wrong_type', `${name} is no text`);
	return value.length <= maxChars ? value : Array.from(value).slice(0, maxChars).join('');
}

/** Three signed counts within the profile's range, from index `from` of a list. */
export function counts3(
	items: readonly CborValue[],
	from: number,
	name: string,
	range: Limits
): Counts3 {
	return [
		integer(items[from], name, range),
		integer(items[from + 1], name, range),
		integer(items[from + 2], name, range)
	];
}

/** A message's fields by key, with the profile's range of counts. Absent optional fields are null. */
export class Fields {
	constructor(
		private readonly map: CborMap,
		readonly range: Limits
	) {}

	raw(name: FieldName): CborValue {
		return this.map.get(KEY[name]);
	}

	required(name: FieldName): CborValue {
		if (!this.map.has(KEY[name])) throw new Refused('wrong_type', `${name} missing`);
		return this.map.get(KEY[name]);
	}

	private optional<T>(name: FieldName, read: (value: CborValue) => T): T | null {
		return this.map.has(KEY[name]) ? read(this.map.get(KEY[name])) : null;
	}

	integer(name: FieldName, limits: Limits): number {
		return integer(this.required(name), name, limits);
	}

	optionalInteger(name: FieldName, limits: Limits): number | null {
		return this.optional(name, (value) => integer(value, name, limits));
	}

	optionalText(name: FieldName, maxChars: number): string | null {
		return this.optional(name, (value) => textOf(value, name, maxChars));
	}

	counts(name: FieldName): Counts3 {
		return counts3(list(this.required(name), name, 3), 0, name, this.range);
	}

	optionalCounts(name: FieldName): Counts3 | null {
		return this.optional(name, (value) => counts3(list(value, name, 3), 0, name, this.range));
	}

	/** Key 5: absent means after a SET pulse. */
	polarity(): 1 | -1 {
		return this.optional('polarity', (value) => sign(value, 'polarity')) ?? 1;
	}

	/** Key 11: copied, so that it does not hold the whole message in memory. */
	commandId(): Uint8Array {
		const value = this.required('command');
		if (!(value instanceof Uint8Array))
			throw new Refused('wrong_type', 'command is no byte string');
		if (value.length !== 8) throw new Refused('wrong_type', `command has ${value.length} bytes`);
		return Uint8Array.from(value);
	}

	optionalCommandId(): Uint8Array | null {
		return this.map.has(KEY.command) ? this.commandId() : null;
	}

	before(): BeforePulse | null {
		return this.optional('before', (value) => {
			const items = list(value, 'before', 4);
			const polarity = items[0] === 0 ? 0 : sign(items[0], 'before polarity');
			return { polarity, counts: counts3(items, 1, 'before', this.range) };
		});
	}

	pulse(): { ageS: number; count: number } | null {
		const both = this.twoCounters('pulse');
		return both === null ? null : { ageS: both[0], count: both[1] };
	}

	tx(): { frames: number; radioMs: number } | null {
		const both = this.twoCounters('tx');
		return both === null ? null : { frames: both[0], radioMs: both[1] };
	}

	private twoCounters(name: 'pulse' | 'tx'): [number, number] | null {
		return this.optional(name, (value) => {
			const items = list(value, name, 2);
			return [integer(items[0], name, UINT53), integer(items[1], name, UINT53)];
		});
	}

	/** The map of keys 18 and 25: how a node reports. */
	habit(name: 'habit' | 'args'): { periodS: number; deltaMg: number } | null {
		return this.optional(name, (value) => {
			if (!(value instanceof Map)) throw new Refused('wrong_type', `${name} is no map`);
			return {
				periodS: integer(value.get('period_s'), `${name} period_s`, INT31),
				deltaMg: integer(value.get('delta_mg'), `${name} delta_mg`, INT31)
			};
		});
	}
}

function sign(value: CborValue, name: string): 1 | -1 {
	const found = integer(value, name, { min: -1, max: 1 });
	if (found === 0) throw new Refused('out_of_range', `${name} 0`);
	return found === 1 ? 1 : -1;
}

/** Protocol, 'Envelope': the payload is a map with integer keys. */
export function integerKeyed(value: CborValue): CborMap {
	if (!(value instanceof Map)) throw new Refused('wrong_type', 'payload is no map');
	for (const key of value.keys()) {
		if (!isInteger(key)) throw new Refused('wrong_type', 'payload key is no integer');
	}
	return value;
}

const isInteger = (key: CborKey): boolean => typeof key !== 'string';
