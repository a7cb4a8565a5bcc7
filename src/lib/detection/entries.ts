import type { BayState, Evidence, HistoryType } from './types';
import { touch, triple, type Before, type Group, type Node } from './state';
import { set3 } from './vec';

/** A change of what is held of a bay, with the words for it. */
export interface Change {
	type: HistoryType;
	state: BayState;
	atMs: number;
	uncertaintyS: number;
	confidence: number;
	evidence: Evidence;
}

/** Two decimals are enough for people and keep stored state short. */
const roundConfidence = (value: number): number => Math.round(value * 1000) / 1000;

/** A strange field is remembered over so many entries: stored state has a limit, and outages add to them. */
const MOST_TOLD = 12;

/** Takes a change into the node's state and tells it. */
export function enter(g: Group, n: Node, change: Change, decidedAtMs: number): void {
	const { slow } = n;
	const confidence = change.state === 'unknown' ? null : roundConfidence(change.confidence);
	if (slow.state !== 'unknown' && change.state === 'unknown') {
		slow.lastKnown = { state: slow.state, atMs: change.atMs };
	}
	if (slow.state !== change.state) slow.sinceMs = change.atMs;
	slow.entries++;
	if (slow.strange !== null) {
		const entries = [...slow.strange.entries, { type: change.type, atMs: change.atMs }];
		slow.strange = entries.length > MOST_TOLD ? null : { ...slow.strange, entries };
	}
	slow.state = change.state;
	slow.confidence = confidence ?? 0;
	slow.evidence = change.evidence;
	if (change.state !== 'unknown') slow.unknownWhy = null;
	touch(n);
	g.out.push({
		kind: 'enter',
		entry: {
			nodeId: n.id,
			type: change.type,
			state: change.state,
			atMs: change.atMs,
			uncertaintyS: change.uncertaintyS,
			confidence,
			evidence: change.evidence,
			decidedAtMs
		}
	});
}

/** Says that an entry never happened. */
export function voidEntry(
	g: Group,
	n: Node,
	type: HistoryType,
	atMs: number,
	decidedAtMs: number,
	why: string
): void {
	if (n.slow.strange !== null) {
		const left = n.slow.strange.entries.filter((e) => e.type !== type || e.atMs !== atMs);
		n.slow.strange = { ...n.slow.strange, entries: left };
	}
	touch(n);
	g.out.push({ kind: 'void', nodeId: n.id, type, atMs, decidedAtMs, why });
}

export function doubtIt(n: Node, reason: string, sinceMs: number): void {
	if (n.slow.doubt?.reason === reason) return;
	n.slow.doubt = { reason, sinceMs };
	touch(n);
}

export function clearDoubt(n: Node): void {
	if (n.slow.doubt === null) return;
	n.slow.doubt = null;
	touch(n);
}

export function ask(
	g: Group,
	n: Node,
	verb: 'pair' | 'report_fast' | 'report_habit' | 'reading',
	cause: string,
	atMs: number
): void {
	g.out.push({ kind: 'ask', nodeId: n.id, verb, cause, atMs });
}

/** What must be remembered to take a change back. */
export function remember(n: Node): Before {
	const { slow, fast } = n;
	return {
		state: slow.state,
		sinceMs: slow.sinceMs,
		confidence: slow.confidence,
		arrival: slow.arrival,
		baseline: triple(fast.baseline),
		evidence: slow.evidence
	};
}

/** Puts back what was held before, but for the baseline. */
export function putBack(n: Node, before: Before): void {
	const { slow } = n;
	slow.state = before.state;
	slow.sinceMs = before.sinceMs;
	slow.confidence = before.confidence;
	slow.arrival = before.arrival;
	slow.evidence = before.evidence;
	touch(n);
}

export function putBaselineBack(n: Node, before: Before): void {
	set3(n.fast.baseline, before.baseline);
}

/** Makes sure that housekeeping looks at this node no later than `atMs`. */
export function lookBy(n: Node, atMs: number): void {
	if (n.fast.checkAtMs === 0 || atMs < n.fast.checkAtMs) n.fast.checkAtMs = atMs;
}
