/** Token bucket of one connection: `perS` messages a second, one second's worth at once. */
export class RateBucket {
	#tokens: number;
	#filledAtMs: number;

	constructor(
		private readonly perS: number,
		nowMs: number
	) {
		this.#tokens = perS;
		this.#filledAtMs = nowMs;
	}

	/** Takes one token; false when there is none. */
	take(nowMs: number): boolean {
		const elapsedMs = nowMs - this.#filledAtMs;
		if (elapsedMs !== 0) {
			this.#filledAtMs = nowMs;
			// A clock set back gives no tokens and takes none.
			if (elapsedMs > 0) {
				this.#tokens = Math.min(this.perS, this.#tokens + (elapsedMs * this.perS) / 1_000);
			}
		}
		if (this.#tokens < 1) return false;
		this.#tokens--;
		return true;
	}

	/** Until a tenth of a second's worth is there again, so that a slowed node wakes ten times a second at most. */
	waitMs(): number {
		const wanted = Math.max(1, this.perS / 10);
		return Math.max(1, Math.ceil(((wanted - this.#tokens) * 1_000) / this.perS));
	}
}
