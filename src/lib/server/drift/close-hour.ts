import { setImmediate as breathe } from 'node:timers/promises';
import { unpackMemory } from '$lib/drift/codec';
import { voteOf } from '$lib/drift/node-drift';
import type { PairRule } from '$lib/drift/pair-rule';
import { siteLine, type LineVote } from '$lib/drift/site-line';
import type { Vec3 } from '$lib/magnetics/vector';
import type { Transactions } from '$lib/server/ingest/transaction';
import type { Sql } from '$lib/server/store/queries/bulk';
import * as hours from '$lib/server/store/queries/drift-hours';
import * as pairs from '$lib/server/store/queries/drift-pairs';
import * as state from '$lib/server/store/queries/drift-state';
import { HOUR_MS, readHour, type NodeInput } from './node-hours';
import { settingsAt, type SiteNode, type SiteSettings } from './site-nodes';
import { takeHour, withFilm, type TakenHour } from './take-hour';

/** Nodes read and worked on between two breaths of the process: some 40 ms. */
const BATCH_NODES = 100;
const DAY_MS = 86_400_000;
/** Late rows move nothing beyond 14 days; a memory of the day before is needed for them. */
const KEPT_DAYS = 15;
/** A reference that begins now takes the site's line of the last hours that knew one. */
const LINE_BACK_MS = DAY_MS;

export interface ClosingSite {
	siteId: number;
	fromMs: number;
	rule: PairRule;
	nodes: readonly SiteNode[];
}

export interface Closing {
	/** For reading. */
	sql: Sql;
	/** Under the pipeline's lease: another copy that has taken over is not overwritten. */
	transactions: Transactions;
}

/**
 * Closes one hour of one site: every node's still readings become an hour, all of them draw the site's line,
 * each is taken apart with it, pulses within the hour come after it. One transaction: the hour is closed or it is
 * not. The same rows, history and pulses give the same bytes, whenever it is done.
 */
export async function closeSiteHour(
	{ sql, transactions }: Closing,
	site: ClosingSite,
	hourMs: number
): Promise<{ hours: number; nodes: number }> {
	const nodes = site.nodes.filter(({ placedAtMs }) => placedAtMs < hourMs + HOUR_MS);
	const settings = await settingsAt(sql, site.siteId, hourMs + HOUR_MS - 1);
	const inputs = await readAll(sql, site.siteId, nodes, hourMs);
	const votes: LineVote[] = [];
	for (const [i, input] of inputs.entries()) {
		const vote =
			input.record === null ? null : voteOf(unpackMemory(input.memory).drift, input.record);
		if (vote !== null) votes.push(vote);
		if (i % BATCH_NODES === 0) await breathe();
	}
	const line = siteLine(votes, settings.site);
	const taken = await takeAll(inputs, settings, { site, hourMs, line });
	const films = await filmHours(sql, taken);
	await transactions.run(async (transaction) => {
		const later = transaction.later;
		await state.writeMemories(
			later,
			taken.map(({ memory }) => memory)
		);
		await hours.write(
			later,
			taken.flatMap(({ hour }) => hour ?? [])
		);
		await hours.write(later, films);
		await pairs.write(
			later,
			taken.flatMap((one) => one.pairs)
		);
		const changeMg: [number, number, number] = [...line.changeMg];
		await state.writeLine(later, site.siteId, { ...line, hourMs, changeMg });
		const closedToMs = hourMs + HOUR_MS;
		if (closedToMs % DAY_MS === 0)
			await state.snapshot(later, site.siteId, closedToMs, closedToMs - KEPT_DAYS * DAY_MS);
		const { siteId, fromMs } = site;
		await state.writeSite(later, { siteId, fromMs, closedToMs });
	});
	return { hours: taken.filter(({ hour }) => hour !== null).length, nodes: nodes.length };
}

async function readAll(
	sql: Sql,
	siteId: number,
	nodes: readonly SiteNode[],
	hourMs: number
): Promise<NodeInput[]> {
	const lineMg = await lineBefore(sql, siteId, hourMs);
	const all: NodeInput[] = [];
	for (let at = 0; at < nodes.length; at += BATCH_NODES) {
		const batch = nodes.slice(at, at + BATCH_NODES);
		const rows = await state.memories(
			sql,
			batch.map(({ id }) => id)
		);
		const memories = new Map(rows.map((row) => [row.nodeId, row]));
		all.push(...(await readHour(sql, batch, hourMs, { memories, lineMg })));
		await breathe();
	}
	return all;
}

async function lineBefore(sql: Sql, siteId: number, hourMs: number): Promise<Vec3 | null> {
	const rows = await state.lines(sql, siteId, hourMs - LINE_BACK_MS, hourMs);
	return rows.filter(({ verdict }) => verdict === 'known').at(-1)?.changeMg ?? null;
}

async function takeAll(
	inputs: readonly NodeInput[],
	settings: SiteSettings,
	{ site, hourMs, line }: { site: ClosingSite; hourMs: number; line: ReturnType<typeof siteLine> }
): Promise<TakenHour[]> {
	const all: TakenHour[] = [];
	for (const [i, input] of inputs.entries()) {
		const { siteId, rule } = site;
		const around = { siteId, rule, hourMs, line, settings: settings.of(input.node.id) };
		const taken = takeHour(input, around);
		if (taken !== null) all.push(taken);
		if (i % BATCH_NODES === 0) await breathe();
	}
	return all;
}

/** Hours that a pulse of this hour has explained in hindsight. */
async function filmHours(sql: Sql, taken: readonly TakenHour[]): Promise<hours.StoredHour[]> {
	const all: hours.StoredHour[] = [];
	for (const { films, memory } of taken)
		for (const film of films)
			all.push(
				...withFilm(await hours.ofNode(sql, memory.nodeId, film.sinceMs, film.pulseMs), film)
			);
	return all;
}
