import type { Groups } from './groups';
import type { HeldMessage } from './subscriber-types';
import { KeyUnreadable } from './opening';
import type { Work } from './work';

/** Why nothing is acknowledged just now. */
export type Hold = 'database' | 'disk_full' | 'wrong_secret';

export interface PipelineStatus {
	hold: Hold | null;
	/** For 'wrong_secret': the node whose key would not open. */
	holdDetail: string | null;
	holdSinceMs: number | null;
	/** Messages taken and not yet acknowledged. */
	pending: number;
	/** Arrival of the oldest of them; null when there is none. */
	oldestPendingMs: number | null;
	lastStoredAtMs: number | null;
	/** Since this pipeline began. */
	messages: number;
	readings: number;
	rejected: number;
	events: number;
	batches: number;
	retries: number;
	/** Groups taken back to a snapshot and replayed for a late row. */
	replays: number;
	/** Times that a group's detection threw and was set aside. */
	setAside: number;
	groups: number;
	waitingRows: number;
	/** Seconds from arrival to commit of the last batch's oldest message. */
	delayS: number;
}

export class PipelineCounters {
	#hold: Hold | null = null;
	#holdDetail: string | null = null;
	#holdSinceMs: number | null = null;
	/** Batches taken and not yet acknowledged: one is opened while one is stored. */
	readonly #pending: { oldestMs: number; messages: number }[] = [];
	#lastStoredAtMs: number | null = null;
	#messages = 0;
	#readings = 0;
	#rejected = 0;
	#events = 0;
	#batches = 0;
	#retries = 0;
	#delayS = 0;
	#replays = 0;
	setAside = 0;

	took(messages: readonly HeldMessage[]): void {
		const oldestMs = messages[0]?.arrivedAtMs;
		if (oldestMs !== undefined) this.#pending.push({ oldestMs, messages: messages.length });
	}

	stored(messages: readonly HeldMessage[], work: Work, nowMs: number): void {
		const first = messages[0];
		if (first !== undefined) this.#pending.shift();
		if (first !== undefined) this.#delayS = Math.max(0, nowMs - first.arrivedAtMs) / 1000;
		this.#lastStoredAtMs = nowMs;
		this.#messages += messages.length;
		this.#readings += work.readings.length;
		this.#rejected += work.rejected.length;
		this.#events += work.loose.length + work.drafts.filter(({ event }) => event !== null).length;
		this.#batches += 1;
		this.#replays += work.replayed.size;
	}

	held(hold: Hold | null, detail: string | null = null): void {
		if (hold !== this.#hold) this.#holdSinceMs = hold === null ? null : Date.now();
		this.#hold = hold;
		this.#holdDetail = detail;
	}

	failed(error: unknown): void {
		this.#retries += 1;
		if (error instanceof KeyUnreadable) this.held('wrong_secret', error.serial);
		else this.held('database', (error as { code?: string }).code ?? null);
	}

	status(groups: Groups): PipelineStatus {
		let loaded = 0;
		let waitingRows = 0;
		for (const group of groups.all()) {
			loaded += 1;
			waitingRows += group.waiting;
		}
		return {
			hold: this.#hold,
			holdDetail: this.#holdDetail,
			holdSinceMs: this.#holdSinceMs,
			pending: this.#pending.reduce((sum, { messages }) => sum + messages, 0),
			oldestPendingMs: this.#pending[0]?.oldestMs ?? null,
			lastStoredAtMs: this.#lastStoredAtMs,
			messages: this.#messages,
			readings: this.#readings,
			rejected: this.#rejected,
			events: this.#events,
			batches: this.#batches,
			retries: this.#retries,
			replays: this.#replays,
			setAside: this.setAside,
			groups: loaded,
			waitingRows,
			delayS: this.#delayS
		};
	}
}
