import type { Vec3 } from '$lib/magnetics/vector';

/** Steps of what is packed; values beyond the range are held at its end. */
const FIELD_PER_MG = 1000;
const DAILY_PER_MG = 20;
const SLOPE_PER_MG = 1024;
const PER_C = 100;
const INT16 = 32_767;
const INT24 = 8_388_607;
const NO_TEMP = -32_768;
const SECOND_MS = 1000;
const HOUR_MS = 3_600_000;

const held = (value: number, most: number): number =>
	Math.min(most, Math.max(-most, Math.round(value)));

/** A field as it is kept: to 0.001 mG, within ±8388 mG. */
export const keptMg = (mg: number): number => held(mg * FIELD_PER_MG, INT24) / FIELD_PER_MG;
export const keptVector = (v: Vec3): Vec3 => [keptMg(v[0]), keptMg(v[1]), keptMg(v[2])];
/** A temperature as it is kept: to 0.01 °C. */
export const keptTempC = (tempC: number): number => held(tempC * PER_C, INT16) / PER_C;

/** Writes little-endian values one behind the other. */
export class Packer {
	readonly #bytes: Uint8Array;
	readonly #view: DataView;
	#at = 0;

	constructor(mostBytes: number) {
		this.#bytes = new Uint8Array(mostBytes);
		this.#view = new DataView(this.#bytes.buffer);
	}

	bytes(): Uint8Array {
		return this.#bytes.slice(0, this.#at);
	}

	u8(value: number): void {
		this.#view.setUint8(this.#at, Math.min(255, Math.max(0, value)));
		this.#at += 1;
	}
	u16(value: number): void {
		this.#view.setUint16(this.#at, Math.min(65_535, Math.max(0, value)), true);
		this.#at += 2;
	}
	u32(value: number): void {
		this.#view.setUint32(this.#at, value, true);
		this.#at += 4;
	}
	f32(value: number): void {
		this.#view.setFloat32(this.#at, value, true);
		this.#at += 4;
	}
	f64(value: number): void {
		this.#view.setFloat64(this.#at, value, true);
		this.#at += 8;
	}
	/** Null is written as NaN, which is never a value of ours. */
	f64OrNull(value: number | null): void {
		this.f64(value ?? NaN);
	}
	i16(value: number): void {
		this.#view.setInt16(this.#at, value, true);
		this.#at += 2;
	}
	tempC(value: number | null): void {
		this.i16(value === null ? NO_TEMP : held(value * PER_C, INT16));
	}
	/** 0.001 mG in 3 bytes an axis. */
	field(v: Vec3): void {
		for (const mg of v) {
			const steps = held(mg * FIELD_PER_MG, INT24);
			this.#view.setInt16(this.#at, steps >> 8, true);
			this.#view.setUint8(this.#at + 2, steps & 255);
			this.#at += 3;
		}
	}
	/** 0.05 mG in 2 bytes an axis, within ±1638 mG: medians of a day. */
	daily(v: Vec3): void {
		for (const mg of v) this.i16(held(mg * DAILY_PER_MG, INT16));
	}
	/** About 0.001 mG/°C in 2 bytes an axis, within ±32. */
	slope(v: Vec3): void {
		for (const perC of v) this.i16(held(perC * SLOPE_PER_MG, INT16));
	}
	floats(v: Vec3): void {
		for (const value of v) this.f32(value);
	}
	seconds(atMs: number): void {
		this.u32(Math.floor(atMs / SECOND_MS));
	}
	/** An hour since the epoch; 0 = null. */
	hour(atMs: number | null): void {
		this.u32(atMs === null ? 0 : Math.floor(atMs / HOUR_MS));
	}
	list<T>(items: readonly T[], write: (item: T) => void): void {
		this.u8(items.length);
		for (const item of items) write(item);
	}
	optional<T>(value: T | null, write: (value: T) => void): void {
		this.u8(value === null ? 0 : 1);
		if (value !== null) write(value);
	}
}

/** Reads what `Packer` wrote. Throws RangeError past the end. */
export class Unpacker {
	readonly #view: DataView;
	#at = 0;

	constructor(bytes: Uint8Array) {
		this.#view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength);
	}

	#take(bytes: number): number {
		this.#at += bytes;
		return this.#at - bytes;
	}
	u8(): number {
		return this.#view.getUint8(this.#take(1));
	}
	u16(): number {
		return this.#view.getUint16(this.#take(2), true);
	}
	u32(): number {
		return this.#view.getUint32(this.#take(4), true);
	}
	f32(): number {
		return this.#view.getFloat32(this.#take(4), true);
	}
	f64(): number {
		return this.#view.getFloat64(this.#take(8), true);
	}
	f64OrNull(): number | null {
		const value = this.f64();
		return Number.isNaN(value) ? null : value;
	}
	i16(): number {
		return this.#view.getInt16(this.#take(2), true);
	}
	tempC(): number | null {
		const steps = this.i16();
		return steps === NO_TEMP ? null : steps / PER_C;
	}
	#mg(): number {
		const at = this.#take(3);
		const high = this.#view.getInt16(at, true);
		return (high * 256 + this.#view.getUint8(at + 2)) / FIELD_PER_MG;
	}
	field(): Vec3 {
		return [this.#mg(), this.#mg(), this.#mg()];
	}
	#scaled(per: number): Vec3 {
		return [this.i16() / per, this.i16() / per, this.i16() / per];
	}
	daily(): Vec3 {
		return this.#scaled(DAILY_PER_MG);
	}
	slope(): Vec3 {
		return this.#scaled(SLOPE_PER_MG);
	}
	floats(): Vec3 {
		return [this.f32(), this.f32(), this.f32()];
	}
	seconds(): number {
		return this.u32() * SECOND_MS;
	}
	hour(): number | null {
		const hours = this.u32();
		return hours === 0 ? null : hours * HOUR_MS;
	}
	list<T>(read: () => T): T[] {
		const items: T[] = [];
		for (let left = this.u8(); left > 0; left--) items.push(read());
		return items;
	}
	optional<T>(read: () => T): T | null {
		return this.u8() === 0 ? null : read();
	}
}
