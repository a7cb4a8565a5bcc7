import type { Vec3 } from '$lib/magnetics/vector';
import { advance, newGroup, view, type Group } from './group';
import type {
	Act,
	GroupItem,
	GroupMember,
	HistoryEntry,
	NodeView,
	Outcome,
	PulseItem,
	RowItem
} from './types';

/** Hand-made readings for tests: a quiet field, movements written down, seeded noise. No simulator. */

export const S = 1000;
export const MIN = 60_000;
export const HOUR = 3_600_000;
/** Monday 2 March 2026, 08:00 UTC. */
export const T0 = Date.UTC(2026, 2, 2, 8);
export const QUIET: Vec3 = [120, -60, 420];
/** Ends learning and acceptance; everything that a test does comes after it. */
export const READY = T0 + 5 * MIN;

export const plus = (a: Vec3, b: Vec3): Vec3 => [a[0] + b[0], a[1] + b[1], a[2] + b[2]];
export const times = (a: Vec3, k: number): Vec3 => [a[0] * k, a[1] * k, a[2] * k];

export function memberOf(nodeId: number, over: Partial<GroupMember> = {}): GroupMember {
	return {
		nodeId,
		eastM: null,
		northM: null,
		row: null,
		profile: { rangeMg: 8000, sensitivityTempcoPerC: -0.003, filmSafeMg: 4000 },
		periodS: 60,
		graceS: 900,
		params: {},
		...over
	};
}

/** Bays side by side, 2.5 m apart, in one row. */
export const bays = (n: number, over: Partial<GroupMember> = {}): GroupMember[] =>
	Array.from({ length: n }, (_, i) =>
		memberOf(i + 1, { eastM: 2.5 * i, northM: 0, row: 'A', ...over })
	);

/** Uniform numbers in [0, 1) by a small mixing generator (multiply, xor, shift), wholly set by the seed. */
export function uniform(seed: number): () => number {
	let a = seed >>> 0;
	return () => {
		a = (a + 0x6d2b79f5) >>> 0;
		let t = Math.imul(a ^ (a >>> 15), a | 1);
		t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
		return ((t ^ (t >>> 14)) >>> 0) / 2 ** 32;
	};
}

/** Normal numbers (Box and Muller). */
export function normal(seed: number): () => number {
	const next = uniform(seed);
	return () => Math.sqrt(-2 * Math.log(1 - next())) * Math.cos(2 * Math.PI * next());
}

export interface Reading {
	nodeId: number;
	atMs: number;
	fieldMg: Vec3;
	tempC?: number | null;
	clipped?: boolean;
}

/** One reading every `everyMs` from `fromMs` on, before `toMs`. */
export function beats(
	nodeId: number,
	fromMs: number,
	toMs: number,
	field: Vec3 | ((atMs: number) => Vec3),
	everyMs = MIN
): Reading[] {
	const count = Math.max(0, Math.ceil((toMs - fromMs) / everyMs));
	return Array.from({ length: count }, (_, i) => {
		const atMs = fromMs + i * everyMs;
		return { nodeId, atMs, fieldMg: typeof field === 'function' ? field(atMs) : field };
	});
}

export const BURST_MS = 500;

/** A burst: the field half way at `atMs`, at its peak half a second later, then on the new level for 5 s. */
export function drives(
	nodeId: number,
	atMs: number,
	from: Vec3,
	to: Vec3,
	peak: Vec3 = plus(to, times(plus(to, times(from, -1)), 0.5))
): Reading[] {
	const way = [times(plus(from, to), 0.5), peak];
	const fields = [...way, ...Array.from({ length: 10 }, () => to)];
	return fields.map((fieldMg, i) => ({ nodeId, atMs: atMs + i * BURST_MS, fieldMg }));
}

/** A group under test and all that it told. */
export class Street {
	readonly group: Group;
	readonly told: Outcome[] = [];
	polarity: 1 | -1 = 1;
	/** Bridge offset: what reaches the server is p B + O. */
	offsetMg: Vec3 = [0, 0, 0];
	tempC: number | null = null;
	private readonly next: () => number;
	private seq = 0;
	private actId = 0;

	constructor(
		members: GroupMember[] = [memberOf(1)],
		readonly noiseMg = 0.4,
		seed = 1
	) {
		this.group = newGroup(members);
		this.next = normal(seed);
	}

	give(item: GroupItem): Outcome[] {
		const out = advance(this.group, item);
		this.told.push(...out);
		return out;
	}

	item(reading: Reading): RowItem {
		const noisy = ([0, 1, 2] as const).map(
			(i) => this.polarity * (reading.fieldMg[i] + this.noiseMg * this.next()) + this.offsetMg[i]
		) as unknown as Vec3;
		return {
			kind: 'row',
			nodeId: reading.nodeId,
			atMs: reading.atMs,
			boot: 1,
			seq: ++this.seq,
			row: 0,
			rawMg: noisy,
			polarity: this.polarity,
			tempC: reading.tempC === undefined ? this.tempC : reading.tempC,
			clipped: reading.clipped === true
		};
	}

	/** Gives readings in order of time, whatever the order of the lists. */
	play(...lists: Reading[][]): Outcome[] {
		const sorted = lists.flat().sort((a, b) => a.atMs - b.atMs);
		return sorted.flatMap((reading) => this.give(this.item(reading)));
	}

	act(atMs: number, act: Act, nodeId = 1): number {
		this.give({ kind: 'act', actId: ++this.actId, nodeId, atMs, act });
		return this.actId;
	}

	/** A pulse with nothing but its time, and what a test adds. */
	pulse(atMs: number, more: Partial<PulseItem> = {}): Outcome[] {
		return this.give({
			kind: 'pulse',
			nodeId: 1,
			atMs,
			boot: 1,
			seq: ++this.seq,
			source: 'pair',
			setMg: null,
			resetMg: null,
			before: null,
			afterMg: null,
			polarityAfter: 1,
			tempC: null,
			...more
		});
	}

	/** Places every node, lets it learn for 3 min and has a person (or the rule) accept; then beats until READY. */
	commission(by: 'person' | 'rule' = 'person', field: Vec3 = QUIET): this {
		for (const { id } of this.group.nodes) {
			this.act(T0, { kind: 'place', preCommissioned: by === 'rule' }, id);
		}
		const ids = this.group.nodes.map((n) => n.id);
		this.play(...ids.map((id) => beats(id, T0 + 2 * S, T0 + 3 * MIN, field, 2 * S)));
		if (by === 'person') {
			for (const id of ids) {
				this.act(T0 + 3 * MIN, { kind: 'accept', seenEmpty: true, by: 'walker' }, id);
			}
		}
		this.play(...ids.map((id) => beats(id, T0 + 3 * MIN, READY, field, 30 * S)));
		return this;
	}

	view(nodeId = 1): NodeView {
		return view(this.group, nodeId);
	}

	entries(nodeId = 1): HistoryEntry[] {
		return this.told.flatMap((o) =>
			o.kind === 'enter' && o.entry.nodeId === nodeId ? [o.entry] : []
		);
	}

	/** Types of what was entered, arrivals and departures only, in order. */
	moves(nodeId = 1): string[] {
		return this.entries(nodeId)
			.map(({ type }) => type as string)
			.filter((type) => type === 'arrival' || type === 'departure');
	}

	voids(nodeId = 1) {
		return this.told.flatMap((o) => (o.kind === 'void' && o.nodeId === nodeId ? [o] : []));
	}

	asks(nodeId = 1): string[] {
		return this.told.flatMap((o) =>
			o.kind === 'ask' && o.nodeId === nodeId ? [`${o.verb}: ${o.cause}`] : []
		);
	}
}
