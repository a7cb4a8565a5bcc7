import type { Transactions } from '$lib/server/ingest/transaction';
import type { NodeEntry } from '$lib/server/ingest/node-entry';
import type { Pipeline } from '$lib/server/ingest/pipeline';
import * as state from '$lib/server/store/queries/drift-state';
import { prepareBoard } from './board-view';
import { closeSiteHour, type Closing, type ClosingSite } from './close-hour';
import { tellConditions } from './conditions';
import { HOUR_MS } from './node-hours';
import { orderPairs } from './pair-orders';
import { rewindSite } from './rewind';
import { nodesBySite, type SiteNode } from './site-nodes';
import { tellPairs } from './tell-pairs';

export interface DriftTimes {
	/** An hour is closed this long after its end: rows up to 15 min late are in by then (method, 'History'). */
	lagMs: number;
	/** After a start nodes are given this long to connect: what they kept meanwhile comes first. */
	startMs: number;
	/** Marks rest this long before hours are closed anew: late rows come in swarms. */
	settleMs: number;
	/** But no longer than this. */
	settleMostMs: number;
}
export const DRIFT_TIMES: DriftTimes = {
	lagMs: 15 * 60_000,
	startMs: 60_000,
	settleMs: 60_000,
	settleMostMs: 20 * 60_000
};

const DAY_MS = 24 * HOUR_MS;
/** A site that is met for the first time begins no further back: what was before is in its references. */
const FIRST_DAYS = 60;
/** Nodes heard within this tell whether a backlog is coming in. */
const HEARD_MS = 60_000;
/** A share of them behind the present: hours would be closed half empty and again and again. */
const BEHIND_SHARE = 0.1;
const BEHIND_MOST_MS = 3 * HOUR_MS;

/** The periodic work of drift, under the pipeline's lease. Nothing of it is held over a restart but in the store. */
export class DriftJob {
	readonly #pipeline: Pipeline;
	readonly #closing: Closing;
	readonly #times: DriftTimes;
	readonly #markedSinceMs = new Map<number, number>();
	readonly #behindSinceMs = new Map<number, number>();
	#closed = false;

	constructor(pipeline: Pipeline, transactions: Transactions, times: DriftTimes = DRIFT_TIMES) {
		this.#pipeline = pipeline;
		this.#closing = { sql: pipeline.room.pool, transactions };
		this.#times = times;
	}

	/** Closes what is due, shows what follows from it, orders pairs. Returns the hours closed. */
	async look(nowMs: number): Promise<number> {
		await tellPairs(this.#pipeline, nowMs);
		const { pool, registry } = this.#pipeline.room;
		const nodes = nodesBySite(registry);
		const marks = new Map((await state.marks(pool)).map((mark) => [mark.siteId, mark]));
		const upToDate: state.DriftSite[] = [];
		const moved: number[] = [];
		let hours = 0;
		for (const row of await state.sites(pool)) {
			const own = nodes.get(row.siteId) ?? [];
			if (own.length === 0 || this.#closed) continue;
			const found = beginOf(row, own, nowMs);
			const mark = marks.get(row.siteId);
			const site = { siteId: row.siteId, fromMs: found.fromMs, rule: row.pairRule, nodes: own };
			if (this.#waits(row.siteId, nowMs)) continue;
			const closed = await this.#bringUp(site, found.closedToMs, mark ?? null, nowMs);
			hours += closed.hours;
			if (closed.hours > 0) moved.push(row.siteId);
			if (closed.done) upToDate.push({ ...row, ...found });
		}
		await tellConditions(
			this.#pipeline,
			upToDate.map(({ siteId }) => siteId),
			nowMs
		);
		for (const site of upToDate) await orderPairs(this.#pipeline, site, nowMs);
		for (const siteId of moved) if (!this.#closed) await prepareBoard(pool, siteId, nowMs);
		return hours;
	}

	close(): void {
		this.#closed = true;
	}

	async #bringUp(
		site: ClosingSite,
		closedToMs: number,
		mark: { hourMs: number; newestMs: number } | null,
		nowMs: number
	): Promise<{ hours: number; done: boolean }> {
		const { frontier } = this.#pipeline.room;
		let atMs = closedToMs;
		if (this.#isRipe(site.siteId, mark, nowMs) && mark !== null) {
			if (mark.hourMs < closedToMs)
				atMs = await rewindSite(this.#closing, site, mark.hourMs, mark.newestMs);
			else await state.clearMarks(this.#closing.sql, site.siteId, mark.newestMs);
			this.#markedSinceMs.delete(site.siteId);
		}
		const dueMs = Math.floor((nowMs - this.#times.lagMs) / HOUR_MS) * HOUR_MS;
		let hours = 0;
		for (; atMs < dueMs && !this.#closed; atMs += HOUR_MS) {
			// Between two batches: what was committed is read, what comes from now on marks.
			const toMs = atMs + HOUR_MS;
			await this.#pipeline.exclusive(async () => frontier.set(site.siteId, toMs));
			await closeSiteHour(this.#closing, site, atMs);
			hours += 1;
		}
		return { hours, done: atMs >= dueMs };
	}

	#isRipe(siteId: number, mark: { newestMs: number } | null, nowMs: number): boolean {
		if (mark === null) return false;
		const sinceMs = this.#markedSinceMs.get(siteId) ?? nowMs;
		this.#markedSinceMs.set(siteId, sinceMs);
		const { settleMs, settleMostMs } = this.#times;
		return nowMs - mark.newestMs >= settleMs || nowMs - sinceMs >= settleMostMs;
	}

	/** A backlog of the site is coming in: nodes that are heard now tell of the past. */
	#waits(siteId: number, nowMs: number): boolean {
		const { registry } = this.#pipeline.room;
		const { oldestPendingMs } = this.#pipeline.status();
		const pending = oldestPendingMs !== null && nowMs - oldestPendingMs > this.#times.lagMs;
		if (!pending && !isBehind(registry.all(), siteId, nowMs, this.#times.lagMs)) {
			this.#behindSinceMs.delete(siteId);
			return false;
		}
		const sinceMs = this.#behindSinceMs.get(siteId) ?? nowMs;
		this.#behindSinceMs.set(siteId, sinceMs);
		return nowMs - sinceMs < BEHIND_MOST_MS;
	}
}

function isBehind(
	entries: Iterable<NodeEntry>,
	siteId: number,
	nowMs: number,
	lagMs: number
): boolean {
	let heard = 0;
	let behind = 0;
	for (const { config, live } of entries) {
		if (config.siteId !== siteId || nowMs - (live.heardAtMs ?? 0) > HEARD_MS) continue;
		heard += 1;
		if (live.last !== null && nowMs - live.last.atMs > lagMs) behind += 1;
	}
	return behind > Math.max(1, BEHIND_SHARE * heard);
}

function beginOf(
	{ fromMs, closedToMs }: { fromMs: number | null; closedToMs: number | null },
	nodes: readonly SiteNode[],
	nowMs: number
): { fromMs: number; closedToMs: number } {
	if (fromMs !== null && closedToMs !== null) return { fromMs, closedToMs };
	const placedMs = Math.min(...nodes.map(({ placedAtMs }) => placedAtMs));
	const begin = Math.max(placedMs, nowMs - FIRST_DAYS * DAY_MS);
	const hourMs = Math.floor(begin / HOUR_MS) * HOUR_MS;
	return { fromMs: hourMs, closedToMs: hourMs };
}
