import type { Vec3 } from '$lib/magnetics/vector';

/**
 * The contract of detection with its callers (live ingest, replay, tuning, accuracy bench).
 * Everything is event time, UTC ms. Fields are raw: counts over the profile's scale, in mG, before
 * polarity and offset (B = p (r - O), method 2); detection holds the offset in use itself.
 */

export type BayState = 'vacant' | 'occupied' | 'unknown';

/** Order within a node is (boot, seq, row), never time (protocol, server step 3). */
export interface RowItem {
	kind: 'row';
	nodeId: number;
	atMs: number;
	boot: number;
	seq: number;
	row: number;
	rawMg: Vec3;
	polarity: 1 | -1;
	tempC: number | null;
	/** Within 8 counts of either end of the range (method 1). */
	clipped: boolean;
}

/** A pair, or the pulse of an ack or of a power-on; what did not come is null, never guessed. */
export interface PulseItem {
	kind: 'pulse';
	nodeId: number;
	atMs: number;
	boot: number;
	seq: number;
	source: 'pair' | 'ack' | 'hello';
	setMg: Vec3 | null;
	resetMg: Vec3 | null;
	/** Polarity held before the first pulse: 0 = not known by the node. */
	before: { polarity: 1 | -1 | 0; rawMg: Vec3 } | null;
	afterMg: Vec3 | null;
	/** Polarity the film holds after this pulse: 1 after SET, pair and power-on; -1 after RESET. */
	polarityAfter: 1 | -1;
	tempC: number | null;
}

export type ActItem = { kind: 'act'; actId: number; nodeId: number; atMs: number; act: Act };
export type Act =
	| { kind: 'place'; preCommissioned: boolean }
	| { kind: 'accept'; seenEmpty: boolean; by: string }
	| { kind: 'settle'; as: 'seen_vacant' | 'told_vacant' | 'seen_occupied'; by: string }
	| { kind: 'undo_settle'; settleActId: number }
	| { kind: 'close'; toMs: number; reason: string }
	| { kind: 'lift' }
	| { kind: 'withdraw' }
	| { kind: 'parameters' };

/** The site's geomagnetic change since the references, in the heading-free frame (h, e, z), for the followed baseline. */
export interface SiteLineItem {
	kind: 'site_line';
	nodeId: number;
	atMs: number;
	gMg: Vec3;
}

export type GroupItem = RowItem | PulseItem | ActItem | SiteLineItem;

export interface Evidence {
	because: string[];
	against: string[];
}

export type HistoryType = 'arrival' | 'departure' | 'unknown' | 'known' | 'settled';

/** One entry of a bay's effective history. Key: (nodeId, type, atMs). */
export interface HistoryEntry {
	nodeId: number;
	type: HistoryType;
	state: BayState;
	atMs: number;
	uncertaintyS: number;
	/** 0..1, null when unknown. */
	confidence: number | null;
	evidence: Evidence;
	/** Event time of the item that decided it. */
	decidedAtMs: number;
}

export interface LearnedReference {
	learnedAtMs: number;
	fieldMg: Vec3;
	sigmaMg: number;
	tempC: number | null;
	offsetMg: Vec3 | null;
	readings: number;
}

/** What advancing a group brings forth, in order. */
export type Outcome =
	| { kind: 'enter'; entry: HistoryEntry }
	/** An entry that later evidence shows never happened (a neighbour's echo, a pulse). */
	| {
			kind: 'void';
			nodeId: number;
			type: HistoryType;
			atMs: number;
			decidedAtMs: number;
			why: string;
	  }
	| { kind: 'learned'; nodeId: number; reference: LearnedReference }
	| { kind: 'accepted'; nodeId: number; atMs: number; provisional: boolean; by: string }
	| {
			kind: 'pulse_judged';
			nodeId: number;
			boot: number;
			seq: number;
			accepted: boolean;
			why: string | null;
	  }
	| { kind: 'act_done'; actId: number; ok: boolean; why: string | null }
	/** Something the server should ask of the node; only live ingest acts on it. */
	| {
			kind: 'ask';
			nodeId: number;
			verb: 'pair' | 'report_fast' | 'report_habit' | 'reading';
			cause: string;
			atMs: number;
	  };

export type Condition =
	'learning' | 'inverted' | 'clipped' | 'refresh_due' | 'drifting' | 'in_service';

/** What a reader is told of a bay now: everything but silence and closure, which ingest judges. */
export interface NodeView {
	state: BayState;
	sinceMs: number | null;
	confidence: number | null;
	/** A step away from the state is seen and not yet judged: for that time confidence is low. */
	moving: boolean;
	doubt: { reason: string; sinceMs: number } | null;
	/** Every condition that holds, most serious first; the first is shown. */
	conditions: Condition[];
	lastKnown: { state: BayState; atMs: number } | null;
	evidence: Evidence;
	fieldMg: Vec3 | null;
	baselineMg: Vec3 | null;
	/** The reference in use was accepted by rule and the field has not come back to it often enough. */
	provisional: boolean;
	offsetMg: Vec3 | null;
	disturbanceMg: number | null;
	onMg: number;
	offMg: number;
	sigmaMg: number | null;
}

/**
 * To be exported by detection/group.ts:
 *
 *   newGroup(members: GroupMember[]): Group
 *   advance(group, item): Outcome[]        in place, deterministic, no clock, no randomness
 *   view(group, nodeId): NodeView
 *   encodeFast(group, nodeId): Uint8Array  at most 300 bytes, layout number first; decode(encode(s)) behaves
 *   encodeSlow(group, nodeId): Uint8Array  bit-identically (state is kept in float32 where stored so)
 *   slowRevision(group, nodeId): number    changes only when the slow state did
 *   restore(members, fast[], slow[]): Group
 *   mustWait(group, item, heardTo: (nodeId: number) => number): boolean
 *                                          true while the group is active and a bursting neighbour has not been
 *                                          heard (heardTo = newest event time arrived, queued rows included) up
 *                                          to item.atMs; the caller waits 2 s of arrival at the most
 *   lastDecisionAtMs(group): number        0 when none
 *   isLate(group, item): boolean           must be put in by snapshot and replay: before its node's last row, at or
 *                                          before a decision it could have changed, or behind a neighbour that a
 *                                          decision of it could touch. Ask it just before advance().
 *   setMember(group, member): void         new parameters, period or grace of a node, from the next item on
 *
 * Evidence names nodes as `{node:12}`; callers put the bay's code there.
 * A layout number that restore() does not know throws RangeError: rebuild that node from its readings.
 */
export interface GroupMember {
	nodeId: number;
	/** Position in metres in the site's plane, null when not known. */
	eastM: number | null;
	northM: number | null;
	/** Nodes of one row share this label (queue rule). */
	row: string | null;
	profile: {
		rangeMg: number;
		sensitivityTempcoPerC: number;
		filmSafeMg: number;
	};
	periodS: number;
	graceS: number;
	/** Overrides of detection/params.ts by name. */
	params: Readonly<Record<string, number>>;
}
