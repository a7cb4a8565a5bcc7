import type { Registry } from './registry';
import type { Work } from './work';

const HOUR_MS = 3_600_000;
/** A late row may undo an entry shortly before it: the hour before is closed anew too. */
const BACK_MS = HOUR_MS;

export interface PulseKey {
	nodeId: number;
	boot: number;
	seq: number;
}

/**
 * What the pipeline must know of drift: how far each site is closed, so that what comes for a closed hour marks
 * it, in the batch's own transaction. The drift job moves the frontier between two batches, before it reads the
 * hour: a row is either seen by the reading or marks.
 */
export class DriftFrontier {
	readonly #closedToMs = new Map<number, number>();
	#newestMs = 0;
	#judged: PulseKey[] = [];

	set(siteId: number, closedToMs: number): void {
		this.#closedToMs.set(siteId, closedToMs);
		this.#newestMs = Math.max(0, ...this.#closedToMs.values());
	}

	/** Whether any site has closed the hour of this time: nearly never, and then it is looked at closely. */
	mayTouch(atMs: number): boolean {
		return atMs < this.#newestMs + BACK_MS;
	}

	/** The first hour to close anew for something that came at `atMs`, or null. */
	hourTouched(siteId: number, atMs: number): number | null {
		const closedToMs = this.#closedToMs.get(siteId) ?? 0;
		if (atMs >= closedToMs) return null;
		return Math.floor((atMs - BACK_MS) / HOUR_MS) * HOUR_MS;
	}

	/** Closed hours that this work touches, by its rows, pulses, history and acts. */
	marksOf(
		work: Work,
		registry: Registry,
		acts: readonly { siteId: number; atMs: number }[] = []
	): { siteId: number; hourMs: number }[] {
		const marks = new Map<string, { siteId: number; hourMs: number }>();
		const touch = (siteId: number | undefined, atMs: number) => {
			const hourMs = siteId === undefined ? null : this.hourTouched(siteId, atMs);
			if (siteId !== undefined && hourMs !== null)
				marks.set(`${siteId}:${hourMs}`, { siteId, hourMs });
		};
		for (const rows of [work.readings, work.pulses])
			for (const { nodeId, atMs } of rows)
				if (this.mayTouch(atMs)) touch(registry.byId(nodeId)?.config.siteId, atMs);
		for (const { siteId, row } of work.drafts) touch(siteId, row.atMs);
		for (const { siteId, atMs } of acts) touch(siteId, atMs);
		return [...marks.values()];
	}

	/** Accepted pairs of a committed batch, to be told at once. */
	noteJudged(work: Work): void {
		// Beyond this nobody waits for them: they are told when their hour is closed.
		if (this.#judged.length > 1000) return;
		for (const { nodeId, boot, seq, accepted } of work.judged)
			if (accepted) this.#judged.push({ nodeId, boot, seq });
	}

	takeJudged(): PulseKey[] {
		const judged = this.#judged;
		this.#judged = [];
		return judged;
	}
}
