import type { z } from 'zod';
import { refreshProof, type refreshSummary, type refreshView } from '$lib/schemas/v1/refresh';
import { rfc3339, rfc3339OrNull } from '$lib/server/api/time';
import type { Sql } from '$lib/server/store/queries/bulk';
import * as history from '$lib/server/store/queries/history';
import type { NamedRefresh } from '$lib/server/store/queries/refresh-views';
import * as refreshes from '$lib/server/store/queries/refreshes';
import { emptyWords, type Spell } from './empty-hours';

export type RefreshSummary = z.infer<typeof refreshSummary>;
export type RefreshView = z.infer<typeof refreshView>;

/** What is told of a film refresh in lists. */
export const summaryOf = (r: NamedRefresh): RefreshSummary => ({
	id: r.id,
	site: r.site,
	node: r.serial,
	bay: r.bay,
	state: r.state,
	origin: r.origin,
	reason: r.reason,
	askedAt: rfc3339(r.askedAtMs),
	approvedAt: rfc3339OrNull(r.approvedAtMs),
	waiting:
		r.waitsFor === null || r.waitsSinceMs === null
			? null
			: { for: r.waitsFor, since: rfc3339(r.waitsSinceMs) },
	sentAt: rfc3339OrNull(r.sentAtMs),
	obeyedAt: rfc3339OrNull(r.obeyedAtMs),
	pulseAt: rfc3339OrNull(r.pulseAtMs),
	stillReadings: r.stillReadings,
	verdict: r.verdict,
	visitWanted: r.visitWanted,
	endedAt: rfc3339OrNull(r.endedAtMs)
});

const round = (value: unknown): unknown =>
	typeof value === 'number'
		? Math.round(value * 1000) / 1000
		: Array.isArray(value)
			? value.map(round)
			: value;

/** Stored figures to a thousandth; null when there is no proof yet. */
export function proofOf(text: string | null): RefreshView['proof'] {
	if (text === null) return null;
	const stored = JSON.parse(text) as Record<string, unknown>;
	const rounded = Object.fromEntries(
		Object.entries(stored).map(([name, value]) => [name, name === 'checks' ? value : round(value)])
	);
	return refreshProof.parse(rounded);
}

const actorOf = (by: string): RefreshView['transitions'][number]['by'] =>
	by.startsWith('person:') ? 'person' : by.startsWith('key:') ? 'key' : by === 'node' ? by : 'rule';

/** Everything of one: who, when and why of every step, and the proof. */
export async function viewOf(sql: Sql, r: NamedRefresh): Promise<RefreshView> {
	const steps = await refreshes.transitions(sql, r.id);
	return {
		...summaryOf(r),
		transitions: steps.map((t) => ({
			from: t.fromState,
			to: t.toState,
			by: actorOf(t.byActor),
			why: t.why,
			at: rfc3339(t.atMs)
		})),
		proof: proofOf(r.proof)
	};
}

const HISTORY_MS = 28 * 86_400_000;

/** When the bay is usually empty, from four weeks of its history: 'mostly Tue 10–14 h'; null = not known. */
export async function usuallyEmpty(
	sql: Sql,
	bay: { bayId: number; timezone: string },
	nowMs: number
): Promise<string | null> {
	const rows = await history.effective(sql, [bay.bayId], nowMs - HISTORY_MS, nowMs);
	const spells = rows.map(({ state, atMs }, i): Spell => ({
		state,
		fromMs: atMs,
		toMs: rows[i + 1]?.atMs ?? nowMs
	}));
	return emptyWords(spells, bay.timezone);
}
