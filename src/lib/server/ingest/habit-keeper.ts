import * as commands from '$lib/server/store/queries/commands';
import { inService, type NodeEntry } from './node-entry';
import type { Pipeline } from './pipeline';
import { deltaFor, FAST_PERIOD_S } from './steps/aside';

/** A reading that was asked for has come by then, and the usual habit is put back. */
const ASKED_FOR_MS = 60_000;
/** While a film refresh counts its still readings; its worker puts the usual back sooner. */
const PROVING_MS = 900_000;
/** A habit that was not taken is asked for again after this; a node may be out of reach for days. */
const AGAIN_MS = 900_000;
const EXPIRES_MS = 86_400_000;
const LEARNING_MOST_MS = 6 * 3_600_000;
/** The delta moves only when it is off by this share: noise estimates breathe. */
const DELTA_SLACK = 0.25;

export interface Habit {
	periodS: number;
	deltaMg: number;
}

/** The habit a node should have now. */
export function wantedHabit(
	usualPeriodS: number,
	deltaMg: number,
	isFast: boolean,
	sigmaMg: number | null
): Habit {
	const fit = deltaFor(sigmaMg);
	const keeps = sigmaMg === null || Math.abs(fit - deltaMg) <= DELTA_SLACK * fit;
	return { periodS: isFast ? FAST_PERIOD_S : usualPeriodS, deltaMg: keeps ? deltaMg : fit };
}

/**
 * Sees to it that nodes report as they should: fast while their quiet field is being found, back to the
 * usual afterwards and after a question, with a delta that noise does not pass (method 3 and 10).
 */
export async function keepHabits(pipeline: Pipeline, nowMs: number): Promise<number> {
	const nodes = [...pipeline.room.registry.all()].flatMap((entry) => {
		const view = pipeline.viewOf(entry.id);
		if (view === null || !inService(entry) || entry.live.heardBoot === null) return [];
		return [{ entry, sigmaMg: view.sigmaMg, learning: view.conditions.includes('learning') }];
	});
	const doubtful = nodes.filter(({ entry: { config }, learning, sigmaMg }) => {
		const usual = wantedHabit(config.usualPeriodS, config.deltaMg, false, sigmaMg);
		return learning || usual.periodS !== config.periodS || usual.deltaMg !== config.deltaMg;
	});
	const last = await lastReports(pipeline, doubtful);
	let ordered = 0;
	for (const { entry, sigmaMg, learning } of doubtful) {
		const before = last.get(entry.id);
		const isFast = learning && before !== undefined && isLearning(before, nowMs);
		const { usualPeriodS, deltaMg, periodS } = entry.config;
		const wanted = wantedHabit(usualPeriodS, deltaMg, isFast, sigmaMg);
		if (wanted.periodS === periodS && wanted.deltaMg === deltaMg) continue;
		if (!mayOrder(before, wanted, nowMs)) continue;
		await order(pipeline, entry, wanted, nowMs);
		ordered += 1;
	}
	return ordered;
}

/** Detection asked for it and has not asked for the usual since; a field that never rests must not empty the cell. */
const isLearning = (last: commands.CommandRow, nowMs: number): boolean =>
	last.cause === 'learning' && nowMs - last.createdAtMs < LEARNING_MOST_MS;

async function lastReports(
	{ room }: Pipeline,
	nodes: readonly { entry: NodeEntry }[]
): Promise<Map<number, commands.CommandRow>> {
	const ids = nodes.map(({ entry }) => entry.id);
	const rows = await commands.lastReports(room.pool, ids);
	return new Map(rows.map((row) => [row.nodeId, row]));
}

/** Not while a question is being answered, nor again and again to a node that does not take it. */
export function mayOrder(
	last: commands.CommandRow | undefined,
	wanted: Habit,
	nowMs: number
): boolean {
	if (last === undefined) return true;
	const isOpen = last.answeredAtMs === null && last.expiresAtMs > nowMs;
	if (last.cause.startsWith('ask') || last.cause.startsWith('refresh')) {
		const sinceMs = last.answeredAtMs ?? (isOpen ? nowMs : last.expiresAtMs);
		return nowMs - sinceMs >= (last.cause.startsWith('refresh') ? PROVING_MS : ASKED_FOR_MS);
	}
	const same = last.periodS === wanted.periodS && last.deltaMg === wanted.deltaMg;
	if (!same) return true;
	return !isOpen && nowMs - (last.answeredAtMs ?? last.expiresAtMs) >= AGAIN_MS;
}

async function order(
	{ room }: Pipeline,
	entry: NodeEntry,
	wanted: Habit,
	nowMs: number
): Promise<void> {
	await commands.giveUp(
		room.pool,
		{ nodeId: entry.id, verb: 'report', otherThanBoot: null },
		nowMs,
		'superseded'
	);
	await commands.order(room.pool, {
		nodeId: entry.id,
		verb: 'report',
		report: wanted,
		boot: entry.live.heardBoot ?? 0,
		cause: wanted.periodS === FAST_PERIOD_S ? 'learning' : 'habit',
		byActor: 'rule',
		createdAtMs: nowMs,
		expiresAtMs: nowMs + EXPIRES_MS
	});
}
