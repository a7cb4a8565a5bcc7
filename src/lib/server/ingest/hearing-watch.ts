import type { Sql } from '$lib/server/store/queries/bulk';
import * as hearing from '$lib/server/store/queries/hearing';

/** A stretch that was not lengthened for this long has ended: the process stood still or could not store. */
const BREAK_MS = 20_000;
/** Silence is judged over at most this long. */
const MEMORY_MS = 3 * 86_400_000;

/**
 * The stretches of time in which this server could hear nodes (method 4, silent). A stretch is stored
 * before it counts, so that an outage of the database never looks like silent nodes.
 */
export class HearingWatch {
	#stretches: hearing.Stretch[] = [];
	#open: hearing.Stretch | null = null;

	async load(sql: Sql, nowMs: number): Promise<void> {
		this.#stretches = await hearing.since(sql, nowMs - MEMORY_MS);
		this.#open = null;
	}

	/** Nothing can be heard just now. */
	deaf(): void {
		this.#open = null;
	}

	/** Nodes could be heard up to now. Throws when that cannot be stored. */
	async hears(sql: Sql, nowMs: number): Promise<void> {
		if (this.#open === null || nowMs - this.#open.toMs > BREAK_MS) {
			const stretch = { fromMs: nowMs, toMs: nowMs };
			await hearing.extend(sql, stretch);
			this.#stretches.push(stretch);
			this.#open = stretch;
			return;
		}
		const longer = { fromMs: this.#open.fromMs, toMs: nowMs };
		await hearing.extend(sql, longer);
		this.#open.toMs = nowMs;
	}

	/** How long a node heard last at `heardAtMs` could have been heard since. */
	unheardMs(heardAtMs: number, nowMs: number): number {
		return hearing.heardMs(this.#stretches, heardAtMs, nowMs);
	}
}
