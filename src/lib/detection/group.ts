import { takeAct } from './acts';
import { decodeFastState, decodeSlowState, encodeFastState, encodeSlowState } from './codec';
import { isMoving, presentConfidence } from './confidence';
import { conditionsOf } from './conditions';
import { resolveParams } from './params';
import { takePulse } from './pulses';
import { takeRow } from './row';
import { followSite } from './site-line';
import { Fast, newSlow, triple, type Group, type Node } from './state';
import { disturbanceMg, offMg, onMg, releaseMg, sigmaMg } from './thresholds';
import type { GroupItem, GroupMember, NodeView, Outcome } from './types';

export type { Group } from './state';

function nodeOf(member: GroupMember, fast: Fast, slow: Node['slow']): Node {
	return {
		id: member.nodeId,
		member,
		params: resolveParams(member.params),
		near: [],
		mates: [],
		fast,
		slow
	};
}

function distanceM(a: GroupMember, b: GroupMember): number {
	if (a.eastM === null || a.northM === null || b.eastM === null || b.northM === null)
		return Infinity;
	return Math.hypot(a.eastM - b.eastM, a.northM - b.northM);
}

function link(nodes: Node[]): void {
	for (const n of nodes) {
		const others = nodes.filter((m) => m !== n);
		n.near = others.filter((m) => distanceM(n.member, m.member) <= n.params.neighbourM);
		n.mates = n.member.row === null ? [] : others.filter((m) => m.member.row === n.member.row);
	}
}

const activity = (n: Node): number =>
	(n.fast.open === 1 ? 1 : 0) + (n.slow.pending === null ? 0 : 1);

function groupOf(nodes: Node[]): Group {
	link(nodes);
	return {
		nodes,
		byId: new Map(nodes.map((n) => [n.id, n])),
		out: [],
		active: nodes.reduce((sum, n) => sum + activity(n), 0)
	};
}

/** A group of nodes that have never been heard; members in ascending nodeId as a rule. */
export function newGroup(members: readonly GroupMember[]): Group {
	return groupOf(members.map((m) => nodeOf(m, new Fast(), newSlow())));
}

/** State of a stored group; null for a member without stored state. Throws RangeError at a foreign layout. */
export function restore(
	members: readonly GroupMember[],
	fast: readonly (Uint8Array | null)[],
	slow: readonly (Uint8Array | null)[]
): Group {
	return groupOf(
		members.map((m, i) => {
			const f = fast[i] ?? null;
			const s = slow[i] ?? null;
			return nodeOf(
				m,
				f === null ? new Fast() : decodeFastState(f),
				s === null ? newSlow() : decodeSlowState(s)
			);
		})
	);
}

function nodeIn(group: Group, nodeId: number): Node {
	const n = group.byId.get(nodeId);
	if (n === undefined) throw new RangeError(`node ${nodeId.toString()} is not of this group`);
	return n;
}

/** New parameters, position, period or grace of a node, from the next item on. */
export function setMember(group: Group, member: GroupMember): void {
	const n = nodeIn(group, member.nodeId);
	n.member = member;
	n.params = resolveParams(member.params);
	link(group.nodes);
}

const NOTHING: Outcome[] = [];

/** Takes one item in, in place; what it brings forth, in order. The answer is the caller's to keep. */
export function advance(group: Group, item: GroupItem): Outcome[] {
	const n = nodeIn(group, item.nodeId);
	switch (item.kind) {
		case 'row':
			takeRow(group, n, item);
			break;
		case 'pulse':
			takePulse(group, n, item);
			break;
		case 'act':
			takeAct(group, n, item);
			break;
		case 'site_line':
			followSite(n, item.gMg);
	}
	if (group.out.length === 0) return NOTHING;
	const { out } = group;
	group.out = [];
	return out;
}

export function encodeFast(group: Group, nodeId: number): Uint8Array {
	return encodeFastState(nodeIn(group, nodeId).fast);
}

export function encodeSlow(group: Group, nodeId: number): Uint8Array {
	return encodeSlowState(nodeIn(group, nodeId).slow);
}

export function slowRevision(group: Group, nodeId: number): number {
	return nodeIn(group, nodeId).slow.revision;
}

/** Event time of the newest decision of any node; 0 = none. */
export function lastDecisionAtMs(group: Group): number {
	return group.nodes.reduce((newest, n) => Math.max(newest, n.fast.decidedAtMs), 0);
}

/** Heard within this of event time: a neighbour whose next rows are about to come. */
const BURSTING_MS = 5000;

/** DEVELOPERS.md, 'Groups and waiting'. */
export function mustWait(
	group: Group,
	item: GroupItem,
	heardTo: (nodeId: number) => number
): boolean {
	if (group.active === 0) return false;
	const n = nodeIn(group, item.nodeId);
	for (const m of group.nodes) {
		if (m === n) continue;
		const heardMs = heardTo(m.id);
		if (heardMs < item.atMs && item.atMs - heardMs <= BURSTING_MS) return true;
	}
	return false;
}

/** A step this recent can still be found an echo. */
const RECENT_MS = 120_000;

const touchable = (m: Node, atMs: number): boolean =>
	m.fast.open === 1 ||
	m.slow.pending !== null ||
	m.slow.echoes.length > 0 ||
	m.slow.steps.some((s) => atMs - s.settledMs < RECENT_MS);

/** Whether this item can be put in only by going back to a snapshot and replaying. */
export function isLate(group: Group, item: GroupItem): boolean {
	const n = nodeIn(group, item.nodeId);
	const { atMs } = item;
	if (item.kind === 'row' && atMs < n.fast.lastAtMs) return true;
	if (atMs <= n.fast.decidedAtMs) return true;
	if (activity(n) === 0 && !n.near.some((m) => m.slow.pending !== null)) return false;
	return (
		reachOf(n).some(
			(m) => m.fast.lastAtMs > atMs && (m.fast.visibleAtMs > atMs || touchable(m, atMs))
		) || n.mates.some((m) => m.fast.visibleAtMs > atMs)
	);
}

/** Whom a decision on this node's row can touch: its neighbours, and theirs where one's step is pending. */
function reachOf(n: Node): Node[] {
	const reach = [n];
	for (const m of reach) {
		if (m !== n && m.slow.pending === null) continue;
		for (const next of m.near) if (!reach.includes(next)) reach.push(next);
	}
	return reach.slice(1);
}

const TWO_READINGS = 2;

/** What a reader is told of a bay now. */
export function view(group: Group, nodeId: number): NodeView {
	const n = nodeIn(group, nodeId);
	const { fast, slow } = n;
	const heard = fast.levelN > 0;
	const based = slow.reference !== null;
	return {
		state: slow.state,
		sinceMs: slow.sinceMs,
		confidence: slow.state === 'unknown' ? null : presentConfidence(n),
		moving: isMoving(n),
		doubt: slow.doubt,
		conditions: conditionsOf(n),
		lastKnown: slow.lastKnown,
		evidence: slow.evidence,
		fieldMg: heard ? triple(fast.last) : null,
		baselineMg: based ? triple(fast.baseline) : null,
		provisional: slow.reference?.provisional === true,
		offsetMg: slow.offset,
		disturbanceMg: heard && based ? disturbanceMg(n) : null,
		onMg: onMg(n),
		offMg: slow.state === 'occupied' ? releaseMg(n) : offMg(n),
		sigmaMg: fast.boxN >= TWO_READINGS || based ? sigmaMg(n) : null
	};
}
