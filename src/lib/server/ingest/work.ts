import type { LearnedReference } from '$lib/detection/types';
import type { NewCommand } from '$lib/server/store/queries/commands';
import type { NodeFacts } from '$lib/server/store/queries/ingest';
import type { Keep, SnapshotRow } from '$lib/server/store/queries/node-state';
import type { PulseRow } from '$lib/server/store/queries/pulses';
import type { ReadingRow } from '$lib/server/store/queries/readings';
import type { Block } from '$lib/server/store/queries/received';
import type { RejectedMessage } from '$lib/server/store/queries/rejected';
import type { DayCount, HourPart } from '$lib/server/store/queries/rollups';
import type { HostedGroup } from './hosted-group';
import type { NodeEntry } from './node-entry';
import type { Draft, Loose } from './telling';

export interface Hello {
	nodeId: number;
	boot: number;
	atMs: number;
	firmware: string | null;
	profileCode: string | null;
	cause: string | null;
}

export interface Answer {
	nodeId: number;
	commandId: Uint8Array;
	outcome: 0 | 1 | 2;
	reason: string | null;
}

/** Everything that one batch writes, gathered before and while its transaction runs. */
export class Work {
	readonly blocks: Block[] = [];
	readonly readings: ReadingRow[] = [];
	readonly pulses: (PulseRow & { moving: boolean })[] = [];
	readonly hellos: Hello[] = [];
	readonly facts = new Map<number, NodeFacts>();
	readonly answers: Answer[] = [];
	readonly hours = new Map<string, HourPart>();
	readonly counts = new Map<string, DayCount>();
	readonly rejected: RejectedMessage[] = [];

	readonly drafts: Draft[] = [];
	readonly loose: Loose[] = [];
	readonly voided: { historyId: number; decidedAtMs: number; stampMs: number }[] = [];
	/** Older entries that a replay brought back into force name the event that tells so. */
	readonly relinked: { historyId: number; eventId: number }[] = [];
	readonly learned: { nodeId: number; reference: LearnedReference }[] = [];
	readonly accepted: { nodeId: number; atMs: number; provisional: boolean; by: string }[] = [];
	readonly judged: {
		nodeId: number;
		boot: number;
		seq: number;
		accepted: boolean;
		why: string | null;
	}[] = [];
	readonly actsDone = new Map<number, string>();
	readonly commands: NewCommand[] = [];
	readonly marks = new Map<string, { nodeId: number; hourMs: number }>();

	readonly closures: { siteId: number; bayId: number | null; nodeId: number | null }[] = [];
	readonly snapshots: SnapshotRow[] = [];
	readonly keeps: Keep[] = [];
	readonly slow: { nodeId: number; state: Uint8Array }[] = [];
	/** Nodes whose fast state or what they show may have changed. */
	readonly touched = new Set<NodeEntry>();
	readonly groups = new Set<HostedGroup>();
	/** Groups whose state comes from a replay: all of it differs from what is stored. */
	readonly replayed = new Set<HostedGroup>();

	constructor(
		/** Rises with every batch, also when the clock does not (history.recorded_at_ms). */
		readonly stampMs: number,
		readonly nowMs: number
	) {}

	fact(nodeId: number): NodeFacts {
		let facts = this.facts.get(nodeId);
		if (facts === undefined) this.facts.set(nodeId, (facts = { nodeId }));
		return facts;
	}

	mark(nodeId: number, atMs: number): void {
		const hourMs = Math.floor(atMs / 3_600_000) * 3_600_000;
		this.marks.set(`${nodeId}:${hourMs}`, { nodeId, hourMs });
	}
}
