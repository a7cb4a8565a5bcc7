const HOUR_MS = 3_600_000;
const HOURS = 24;
const BYTES_EACH = 8;

/**
 * The least (arrival - sent) of the last 24 hours, ms (protocol, server step 4), kept as the least of
 * each hour: the window is then between 24 and 25 hours long, and 192 bytes hold it.
 */
export class SkewWindow {
	readonly #byHour = new Map<number, number>();
	/** Set by `note` when the stored form would differ. */
	changed = false;

	note(arrivedAtMs: number, skewMs: number): void {
		// Stored in four bytes: a clock off by more than 24 days is off by 24 days.
		const ms = Math.max(-0x7fffffff, Math.min(0x7fffffff, Math.round(skewMs)));
		const hour = Math.floor(arrivedAtMs / HOUR_MS);
		const known = this.#byHour.get(hour);
		if (known !== undefined && known <= ms) return;
		this.#byHour.set(hour, ms);
		this.#forget(hour);
		this.changed = true;
	}

	/** null while nothing was noted within the window. */
	least(nowMs: number): number | null {
		const first = Math.floor(nowMs / HOUR_MS) - HOURS;
		let least: number | null = null;
		for (const [hour, ms] of this.#byHour)
			if (hour >= first && (least === null || ms < least)) least = ms;
		return least;
	}

	encode(): Buffer {
		const bytes = Buffer.alloc(this.#byHour.size * BYTES_EACH);
		[...this.#byHour].forEach(([hour, ms], i) => {
			bytes.writeUInt32LE(hour, i * BYTES_EACH);
			bytes.writeInt32LE(ms, i * BYTES_EACH + 4);
		});
		return bytes;
	}

	static decode(bytes: Buffer): SkewWindow {
		const window = new SkewWindow();
		for (let at = 0; at + BYTES_EACH <= bytes.length; at += BYTES_EACH)
			window.#byHour.set(bytes.readUInt32LE(at), bytes.readInt32LE(at + 4));
		return window;
	}

	#forget(hour: number): void {
		for (const known of this.#byHour.keys())
			if (known < hour - HOURS || this.#byHour.size > HOURS + 1) this.#byHour.delete(known);
	}
}
