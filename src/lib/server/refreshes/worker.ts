import { randomBytes } from 'node:crypto';
import type { Store } from '$lib/server/store/connect';
import { STARTED_ANEW } from '$lib/server/store/queries/commands';
import { readProfile } from '$lib/server/store/queries/profiles';
import * as facts from '$lib/server/store/queries/refresh-facts';
import type { OpenRefresh } from '$lib/server/store/queries/refresh-facts';
import { stormNodeIds } from '$lib/server/store/queries/notices';
import * as stored from '$lib/server/store/queries/refresh-settings';
import * as refreshes from '$lib/server/store/queries/refreshes';
import { transaction } from '$lib/server/store/transaction';
import type { Log } from '$lib/server/log';
import { apply } from './apply';
import type { RefreshEvent } from './course';
import { holding, type GuardFacts } from './guards';
import { localTime } from './local-time';
import { proofInput, stillAfter } from './measure';
import { enterPairs } from './pair-rule';
import { REFRESH_PARAMS } from './params';
import { prove, verdictOf } from './proof';
import { runSchedule } from './schedule';
import { settingsOf, type RefreshSettings } from './settings';

const HOUR_MS = 3_600_000;
/** How long after its end a called-off film refresh is watched for an answer. */
const LATE_MS = 86_400_000;
/** Detection judges a pair with its next batch; it may be set aside for a minute. */
const JUDGED_WITHIN_MS = 120_000;
/** One order may take several steps in a look: answered, pulsed, measured, judged. */
const MOST_STEPS = 6;

/**
 * Carries film refreshes on: waiting for their chance, sending, measuring, judging. Everything it knows stands
 * in the database, so it may end and begin anew at any point; every step is decided anew under the row's lock.
 */
export class RefreshWorker {
	readonly #store: Store;
	readonly #log: Log;
	#scheduledAtMs = 0;

	constructor(store: Store, log: Log) {
		this.#store = store;
		this.#log = log;
	}

	/** One look at everything that is open. Returns how many steps were made. */
	async look(nowMs: number): Promise<number> {
		await enterPairs(this.#store, nowMs);
		const settings = await this.#settings();
		if (nowMs - this.#scheduledAtMs >= 60_000 || nowMs < this.#scheduledAtMs) {
			this.#scheduledAtMs = nowMs;
			await runSchedule(this.#store, settings, nowMs);
		}
		const { pool } = this.#store;
		const all = await facts.open(pool);
		const underWay = new Map<number, number>();
		for (const r of all)
			if (r.state === 'sent') underWay.set(r.siteId, (underWay.get(r.siteId) ?? 0) + 1);
		const stormy = await stormNodeIds(pool, [...new Set(all.map(({ siteId }) => siteId))]);
		let steps = 0;
		for (const r of [...all, ...(await facts.lateObeyed(pool, nowMs - LATE_MS))]) {
			try {
				steps += await this.#carryOn(r, { settings, underWay, stormy, nowMs });
			} catch (error) {
				this.#log.warn({ refresh: r.id, message: (error as Error).message }, 'looked at again');
			}
		}
		return steps;
	}

	async #settings(): Promise<Map<number, RefreshSettings>> {
		const sites = await stored.settings(this.#store.pool, null);
		return new Map(sites.map((site) => [site.siteId, settingsOf(site)]));
	}

	async #carryOn(first: OpenRefresh, look: Look): Promise<number> {
		let r = first;
		let steps = 0;
		for (; steps < MOST_STEPS; steps += 1) {
			const next = await this.#next(r, look);
			if (next === null) break;
			const applied = await transaction(
				this.#store,
				async ({ sql }) => await apply(sql, r.id, next.event, next.proof ?? null),
				(done) => done.ok
			);
			if (!applied.ok || applied.row === null) break;
			if (applied.row.state === 'sent' && r.state === 'waiting')
				look.underWay.set(r.siteId, (look.underWay.get(r.siteId) ?? 0) + 1);
			r = { ...r, ...applied.row };
			if (applied.row.state === 'sent') break;
		}
		return steps;
	}

	/** What has happened to it since; null = nothing. */
	async #next(r: OpenRefresh, look: Look): Promise<Next | null> {
		const { nowMs } = look;
		if (r.endedAtMs !== null) return answeredOf(r, nowMs);
		if (nowMs - r.askedAtMs >= REFRESH_PARAMS.expiresMs)
			return { event: { kind: 'tick', atMs: nowMs } };
		switch (r.state) {
			case 'approved':
				return { event: { kind: 'take_up', atMs: nowMs } };
			case 'waiting':
				return answeredOf(r, nowMs) ?? waitingOf(r, look);
			case 'sent':
				return answeredOf(r, nowMs) ?? unansweredOf(r, nowMs);
			case 'obeyed':
				return await this.#obeyedOf(r, nowMs);
			case 'measured':
				return await this.#measuredOf(r, nowMs);
			default:
				return null;
		}
	}

	async #obeyedOf(r: OpenRefresh, nowMs: number): Promise<Next | null> {
		if (r.pulseAtMs === null) {
			if (r.pairAtMs !== null && r.commandId !== null)
				return {
					event: { kind: 'pulsed', commandId: r.commandId, pulseAtMs: r.pairAtMs, atMs: nowMs }
				};
			const waited = nowMs - (r.obeyedAtMs ?? nowMs);
			return waited < REFRESH_PARAMS.figuresMs
				? null
				: { event: { kind: 'figures_lost', atMs: nowMs } };
		}
		const moved = bayMoved(r, nowMs);
		if (moved !== null || r.disturbed) return moved;
		const profile = readProfile(r.profileCode, r.profileBody);
		if (profile === null) return null;
		const still = (await stillAfter(this.#store.pool, r, profile, nowMs)).length;
		if (still === r.stillReadings) return null;
		return { event: { kind: 'counted', stillReadings: still, atMs: nowMs } };
	}

	async #measuredOf(r: OpenRefresh, nowMs: number): Promise<Next | null> {
		const profile = readProfile(r.profileCode, r.profileBody);
		const { pool } = this.#store;
		const input = profile === null ? null : await proofInput(pool, r, profile, nowMs);
		if (input === null) return null;
		const isYoung = nowMs - input.pulseAtMs < JUDGED_WITHIN_MS + REFRESH_PARAMS.figuresMs;
		if (input.offsetTaken === null && isYoung) return null;
		const proof = prove(input, REFRESH_PARAMS);
		const { cured, words, visit } = verdictOf(proof, REFRESH_PARAMS);
		const notCuredBefore = await refreshes.notCuredInRow(pool, r.nodeId, r.bayId);
		return {
			event: { kind: 'judged', cured, verdict: words, visit, notCuredBefore, atMs: nowMs },
			proof: JSON.stringify(proof)
		};
	}
}

interface Look {
	settings: ReadonlyMap<number, RefreshSettings>;
	underWay: Map<number, number>;
	/** Nodes told together as not heard. */
	stormy: ReadonlySet<number>;
	nowMs: number;
}
interface Next {
	event: RefreshEvent;
	proof?: string;
}

/** The node's own word on the command; what the sender said of a reboot is none. A pair is an answer too. */
function answeredOf(r: OpenRefresh, nowMs: number): Next | null {
	if (r.commandId === null) return null;
	const said = r.outcome !== null && r.answer !== STARTED_ANEW;
	if (!said && r.pairAtMs === null) return null;
	const outcome = r.pairAtMs !== null ? 0 : (r.outcome ?? 0);
	return {
		event: {
			kind: 'answered',
			commandId: r.commandId,
			outcome,
			reason: r.answer,
			atMs: nowMs
		}
	};
}

function unansweredOf(r: OpenRefresh, nowMs: number): Next | null {
	if (r.answer === STARTED_ANEW) return { event: { kind: 'rebooted', atMs: nowMs } };
	const over = (r.commandExpiresAtMs ?? nowMs) + REFRESH_PARAMS.graceMs;
	return nowMs < over ? null : { event: { kind: 'lapsed', atMs: nowMs } };
}

function guardFacts(r: OpenRefresh, s: RefreshSettings, look: Look): GuardFacts {
	const profile = readProfile(r.profileCode, r.profileBody);
	return {
		paused: r.bulkState === 'paused',
		withdrawn: r.withdrawnAtMs !== null || r.nodeBayId !== r.bayId,
		heardBoot: r.heardBoot,
		storm: look.stormy.has(r.nodeId),
		silent: r.bayCondition === 'silent',
		bay: r.bayState,
		baySinceMs: r.baySinceMs,
		anyHour: r.anyHour,
		localMinute: localTime(look.nowMs, s.timezone).minute,
		quietFromMin: s.quietFromMin,
		quietToMin: s.quietToMin,
		batteryMv: r.batteryMv,
		batteryFloorMv: profile?.batteryFloorMv ?? Infinity,
		// What was sent and not answered may have fired.
		lastPulseAtMs: maxOf(r.lastPulseAtMs, r.sentAtMs),
		lastEndAtMs: r.lastEndAtMs,
		holdOffMs: s.holdOffH * HOUR_MS,
		underWay: look.underWay.get(r.siteId) ?? 0,
		mostAtOnce: s.mostAtOnce
	};
}

const maxOf = (a: number | null, b: number | null): number | null =>
	a === null ? b : b === null ? a : Math.max(a, b);

function waitingOf(r: OpenRefresh, look: Look): Next | null {
	const s = look.settings.get(r.siteId);
	if (s === undefined) return null;
	const [guard] = holding(guardFacts(r, s, look), look.nowMs, REFRESH_PARAMS);
	if (guard !== undefined)
		return guard === r.waitsFor ? null : { event: { kind: 'blocked', guard, atMs: look.nowMs } };
	const freshId = randomBytes(8).toString('hex');
	return { event: { kind: 'clear', freshId, boot: r.heardBoot ?? 0, atMs: look.nowMs } };
}

/** A vehicle that is there, or that came and left between two looks. */
function bayMoved(r: OpenRefresh, nowMs: number): Next | null {
	const isEmpty = r.bayState === 'vacant';
	const sinceMs = r.baySinceMs ?? 0;
	if (r.disturbed) return isEmpty ? { event: { kind: 'empty', sinceMs, atMs: nowMs } } : null;
	const cameAndLeft = isEmpty && sinceMs > (r.measureFromMs ?? Infinity);
	return isEmpty && !cameAndLeft ? null : { event: { kind: 'vehicle', atMs: nowMs } };
}
