import type { Outcome } from '$lib/detection/types';
import { diffHistory } from '$lib/detection/feed';
import type { Sql } from '$lib/server/store/queries/bulk';
import * as history from '$lib/server/store/queries/history';
import type { NodeEntry } from '../node-entry';
import type { Registry } from '../registry';
import type { Replay, Stamped } from '../replay';
import { draftOf, evidenceText, keyOf, voiding, type Draft } from '../telling';
import type { Work } from '../work';
import { takeAside } from './aside';

/** A time moved by less is not told again (method, 'History and feed'). */
const SAME_WITHIN_MS = 60_000;

type Void = Extract<Outcome, { kind: 'void' }>;
type Enter = Extract<Outcome, { kind: 'enter' }>;

const bayIdOf = (entry: NodeEntry | undefined): number | null => entry?.config.bayId ?? null;

function draft(
	registry: Registry,
	{ entry: told }: Enter,
	when: { stampMs: number; nowMs: number; late: boolean }
): Draft | null {
	const entry = registry.byId(told.nodeId);
	const bayId = bayIdOf(entry);
	if (entry === undefined || bayId === null) return null;
	const bayOf = (id: number) => registry.byId(id)?.config.bayCode ?? null;
	return draftOf(entry, bayId, told, when, evidenceText(told.evidence, bayOf));
}

/** Takes what detection brought forth from rows that came in their order. */
export async function tell(
	sql: Sql,
	registry: Registry,
	work: Work,
	outcomes: readonly Outcome[]
): Promise<void> {
	const when = { stampMs: work.stampMs, nowMs: work.nowMs, late: false };
	for (const outcome of outcomes) {
		if (outcome.kind === 'enter') {
			const made = draft(registry, outcome, when);
			if (made === null) continue;
			linkSilence(registry.byId(outcome.entry.nodeId), made);
			work.drafts.push(made);
		} else if (outcome.kind === 'void') await tellVoid(sql, registry, work, outcome);
		else takeAside(registry, work, outcome, true);
	}
}

/** The feed has told this `unknown` already, when the node fell silent: history names that event. */
function linkSilence(entry: NodeEntry | undefined, made: Draft): void {
	const told = entry?.live.silence.unknown ?? null;
	if (entry === undefined || told === null) return;
	if (made.row.type !== 'unknown') return;
	if (Math.abs(made.row.atMs - told.atMs) >= SAME_WITHIN_MS) return;
	made.row.eventId = told.eventId;
	made.event = null;
	entry.live.silence.unknown = null;
}

async function tellVoid(sql: Sql, registry: Registry, work: Work, outcome: Void): Promise<void> {
	const entry = registry.byId(outcome.nodeId);
	const bayId = bayIdOf(entry);
	if (entry === undefined || bayId === null) return;
	const key = keyOf(bayId, outcome.type, outcome.atMs);
	const own = work.drafts.findLast(
		({ row }) => row.voidedAtMs === null && keyOf(row.bayId, row.type, row.atMs) === key
	);
	if (own !== undefined) {
		own.row.voidedAtMs = outcome.decidedAtMs;
		own.row.voidRecordedAtMs = work.stampMs;
		own.event = null;
		return;
	}
	const row = await history.findEffective(sql, bayId, outcome.type, outcome.atMs);
	if (row === null) return;
	work.voided.push({
		historyId: row.id,
		decidedAtMs: outcome.decidedAtMs,
		stampMs: work.stampMs
	});
	if (row.eventId !== null)
		work.loose.push({
			siteId: entry.config.siteId,
			event: voiding(entry.id, row, row.eventId, false, outcome.why)
		});
}

/** One entry while a replay rewrites history. */
interface Working {
	draft: Draft | null;
	/** An entry that stood before the snapshot. */
	older: history.HistoryRow | null;
	voided: boolean;
}

/**
 * Takes what a replay brought forth: history after its beginning is written anew, and the feed gets the
 * difference between what it has told and what now holds (method, 'History and feed').
 */
export async function tellReplay(
	sql: Sql,
	registry: Registry,
	work: Work,
	replay: Replay
): Promise<void> {
	const bays = replay.group.entries.flatMap(({ config }) =>
		config.bayId === null ? [] : [{ bayId: config.bayId, fromMs: config.placedAtMs ?? 0 }]
	);
	const before = await history.recordedAfter(sql, bays, replay.fromStampMs);
	const told = before.filter(({ voidedAtMs, eventId }) => voidedAtMs === null && eventId !== null);
	await history.takeBack(sql, bays, replay.fromStampMs);
	const working = new Map<string, Working[]>();
	const drafts: Draft[] = [];
	for (const { outcome, stampMs } of replay.outcomes)
		await retell(sql, registry, work, { outcome, stampMs }, working, drafts);
	const nodeOf = new Map(replay.group.entries.map(({ config, id }) => [config.bayId, id]));
	const feed: Feed = { registry, work, nodeOf };
	diffFeed(feed, told, drafts);
	tellOlder(feed, replay.fromStampMs, before, working);
	work.drafts.push(...drafts);
}

/** What telling the difference needs everywhere. */
interface Feed {
	registry: Registry;
	work: Work;
	nodeOf: ReadonlyMap<number | null, number>;
}

async function retell(
	sql: Sql,
	registry: Registry,
	work: Work,
	{ outcome, stampMs }: Stamped,
	working: Map<string, Working[]>,
	drafts: Draft[]
): Promise<void> {
	if (outcome.kind === 'enter') {
		const made = draft(registry, outcome, { stampMs, nowMs: work.nowMs, late: true });
		if (made === null) return;
		drafts.push(made);
		const key = keyOf(made.row.bayId, made.row.type, made.row.atMs);
		const there = working.get(key) ?? [];
		working.set(key, [...there, { draft: made, older: null, voided: false }]);
	} else if (outcome.kind === 'void')
		await revoid(sql, registry, work, { outcome, stampMs }, working);
	else takeAside(registry, work, outcome, false);
}

async function revoid(
	sql: Sql,
	registry: Registry,
	work: Work,
	{ outcome, stampMs }: { outcome: Void; stampMs: number },
	working: Map<string, Working[]>
): Promise<void> {
	const bayId = bayIdOf(registry.byId(outcome.nodeId));
	if (bayId === null) return;
	const key = keyOf(bayId, outcome.type, outcome.atMs);
	const own = working.get(key)?.findLast(({ voided }) => !voided);
	if (own?.draft) {
		own.voided = true;
		own.draft.row.voidedAtMs = outcome.decidedAtMs;
		own.draft.row.voidRecordedAtMs = stampMs;
		return;
	}
	const row = await history.findEffective(sql, bayId, outcome.type, outcome.atMs);
	if (row === null) return;
	work.voided.push({ historyId: row.id, decidedAtMs: outcome.decidedAtMs, stampMs });
	working.set(key, [...(working.get(key) ?? []), { draft: null, older: row, voided: true }]);
}

function diffFeed(feed: Feed, told: readonly history.HistoryRow[], drafts: readonly Draft[]): void {
	const held = drafts.filter(({ row }) => row.voidedAtMs === null);
	for (const made of drafts) if (made.row.voidedAtMs !== null) made.event = null;
	const difference = diffHistory(
		told.map((row) => ({ ...row, nodeId: feed.nodeOf.get(row.bayId) ?? 0 })),
		held.map((made) => ({ ...entryOf(made), draft: made }))
	);
	const anew = new Set(difference.enters.map((entry) => (entry as { draft?: Draft }).draft));
	const gone = new Set(difference.voids.map(({ eventId }) => eventId));
	keepTold(
		told.filter(({ eventId }) => !gone.has(eventId)),
		held.filter((made) => !anew.has(made))
	);
	for (const row of told) if (gone.has(row.eventId)) pushVoid(feed, row);
}

const entryOf = ({ nodeId, row }: Draft) => ({
	nodeId,
	type: row.type,
	state: row.state,
	atMs: row.atMs,
	uncertaintyS: row.uncertaintyS,
	confidence: null,
	evidence: { because: [], against: [] },
	decidedAtMs: row.decidedAtMs
});

/** Entries that the feed has told keep the event that told them: the nearest of their kind. */
function keepTold(told: readonly history.HistoryRow[], held: readonly Draft[]): void {
	const left = new Set(told);
	for (const made of held) {
		const { row } = made;
		let best: history.HistoryRow | null = null;
		for (const old of left)
			if (
				old.bayId === row.bayId &&
				old.type === row.type &&
				old.state === row.state &&
				(best === null || Math.abs(old.atMs - row.atMs) < Math.abs(best.atMs - row.atMs))
			)
				best = old;
		if (best === null) continue;
		left.delete(best);
		row.eventId = best.eventId;
		made.event = null;
	}
}

const LATE_WHY = 'rows that came late show otherwise';

function pushVoid({ registry, work, nodeOf }: Feed, row: history.HistoryRow): void {
	const nodeId = nodeOf.get(row.bayId);
	const siteId = nodeId === undefined ? undefined : registry.byId(nodeId)?.config.siteId;
	if (row.eventId === null || siteId === undefined || nodeId === undefined) return;
	work.loose.push({ siteId, event: voiding(nodeId, row, row.eventId, true, LATE_WHY) });
}

/** Entries older than the snapshot whose voiding the replay took back or made. */
function tellOlder(
	feed: Feed,
	fromStampMs: number,
	before: readonly history.HistoryRow[],
	working: ReadonlyMap<string, Working[]>
): void {
	const revoided = new Map(
		[...working.values()]
			.flat()
			.flatMap(({ older }) => (older === null ? [] : [[older.id, older] as const]))
	);
	const wasVoided = before.filter(
		(row) => row.recordedAtMs <= fromStampMs && row.voidedAtMs !== null
	);
	for (const row of wasVoided) if (!revoided.delete(row.id)) revive(feed, row);
	for (const row of revoided.values()) pushVoid(feed, row);
}

/** Its event was voided: a new one says that it holds after all. */
function revive({ registry, work, nodeOf }: Feed, row: history.HistoryRow): void {
	const nodeId = nodeOf.get(row.bayId);
	const siteId = nodeId === undefined ? undefined : registry.byId(nodeId)?.config.siteId;
	if (siteId === undefined || nodeId === undefined) return;
	const { bayId, type, state, atMs, confidence20, uncertaintyS, evidence } = row;
	work.loose.push({
		siteId,
		event: {
			bayId,
			nodeId,
			type,
			state,
			atMs,
			confidence20,
			uncertaintyS,
			evidence,
			late: true,
			voids: null
		},
		told: (eventId) => work.relinked.push({ historyId: row.id, eventId })
	});
}
