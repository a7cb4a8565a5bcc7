import type { PublishedChange, PublishedDetector, PublishedMethod, PublishedRow } from './method';

/**
 * Adaptive threshold detection of the Berkeley road-sensor papers (Cheung, Coleri, Dundar, Ganesh, Tan,
 * Varaiya, TRB 2005; Cheung and Varaiya, UCB-ITS-PRR-2007-4) as method.md 12 names it: a baseline by
 * EWMA, over-threshold flags, M of N, a state machine of five states. Their figures [M]; written for
 * 128 Hz at a road, here at a bay's reporting rate, so counts are in readings, not in their samples.
 */
const ALPHA = 0.05;
const THRESHOLD_MG = 30;
const WINDOW = 4;
const ENOUGH = 3;
const LEAST = 1;
/** Without any crossing for so long the counts start anew, s. */
const FORGET_S = 300;

type State = 'no vehicle' | 'count ones' | 'vehicle' | 'count zeros' | 'settled';

class AdaptiveThreshold implements PublishedDetector {
	readonly #baseline: number[];
	#state: State = 'no vehicle';
	#flags: boolean[] = [];
	#enteredAtMs = 0;

	constructor(quietMg: readonly number[]) {
		this.#baseline = [...quietMg];
	}

	take(row: PublishedRow): PublishedChange | null {
		const over = row.fieldMg.some((b, i) => Math.abs(b - this.#baseline[i]!) > THRESHOLD_MG);
		this.#flags = [...this.#flags.slice(1 - WINDOW), over];
		const ones = this.#flags.filter(Boolean).length;
		switch (this.#state) {
			case 'no vehicle':
				// The baseline adapts only while nothing crosses it.
				if (over) this.#enter('count ones', row.atMs);
				else this.#adapt(row);
				return null;
			case 'count ones':
				if (ones >= ENOUGH) {
					this.#enter('vehicle', row.atMs);
					return { type: 'arrival', atMs: row.atMs };
				}
				if (ones < LEAST) this.#enter('settled', row.atMs);
				return null;
			case 'vehicle':
				if (!over) this.#enter('count zeros', row.atMs);
				return null;
			case 'count zeros':
				if (WINDOW - ones >= ENOUGH) {
					this.#enter('settled', row.atMs);
					return { type: 'departure', atMs: row.atMs };
				}
				if (ones >= ENOUGH) this.#enter('vehicle', row.atMs);
				else if (row.atMs - this.#enteredAtMs > FORGET_S * 1000) {
					this.#enter('settled', row.atMs);
					return { type: 'departure', atMs: row.atMs };
				}
				return null;
			case 'settled':
				if (over) this.#enter('count ones', row.atMs);
				else {
					this.#adapt(row);
					this.#enter('no vehicle', row.atMs);
				}
				return null;
		}
	}

	#enter(state: State, atMs: number): void {
		this.#state = state;
		this.#enteredAtMs = atMs;
	}

	#adapt({ fieldMg }: PublishedRow): void {
		fieldMg.forEach((b, i) => (this.#baseline[i]! += ALPHA * (b - this.#baseline[i]!)));
	}
}

export const adaptiveThreshold: PublishedMethod = {
	name: 'adaptive threshold (Berkeley)',
	source: 'Cheung et al., TRB 2005; Cheung and Varaiya 2007, method.md 12',
	start: (quietMg) => new AdaptiveThreshold(quietMg)
};
