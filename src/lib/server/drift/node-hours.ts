import { packMemory, unpackMemory, type DriftMemory } from '$lib/drift/codec';
import { startDrift } from '$lib/drift/node-drift';
import { nodeHour, type RawRow } from '$lib/drift/node-hour';
import { stretchesOf, without } from '$lib/drift/stretches';
import type { HourRecord } from '$lib/drift/types';
import { countsToMg } from '$lib/magnetics/counts';
import { magnitude, subtract, ZERO, type Vec3 } from '$lib/magnetics/vector';
import type { Sql } from '$lib/server/store/queries/bulk';
import * as inputs from '$lib/server/store/queries/drift-inputs';
import type { SiteNode } from './site-nodes';

const CLIPPED = 1;
export const HOUR_MS = 3_600_000;

/** What one hour of a node is made of, and what was remembered of it before. */
export interface NodeInput {
	node: SiteNode;
	/** Packed: many nodes at once unpacked would fill the memory. */
	memory: Uint8Array;
	/** It begins anew: there was none, or it counts from another reference. */
	fresh: boolean;
	record: HourRecord | null;
	/** Pulses within the hour, in order of time; taken after it. */
	pulses: (inputs.DriftPulse & { vacant: boolean })[];
	lastClippedAtMs: number | null;
	lastOverFilmAtMs: number | null;
}

interface Known {
	memories: ReadonlyMap<number, { placedAtMs: number; memory: Uint8Array }>;
	/** The site's line when last known, for references that begin now. */
	lineMg: Vec3 | null;
}

const byKey = <T, K>(rows: readonly T[], key: (row: T) => K): Map<K, T[]> => {
	const map = new Map<K, T[]>();
	for (const row of rows) {
		const list = map.get(key(row));
		if (list === undefined) map.set(key(row), [row]);
		else list.push(row);
	}
	return map;
};

/** Reads the hour of some nodes of one site. Nodes without an accepted reference are left out. */
export async function readHour(
	sql: Sql,
	nodes: readonly SiteNode[],
	hourMs: number,
	known: Known
): Promise<NodeInput[]> {
	const ids = nodes.map(({ id }) => id);
	const bays = nodes.map(({ bayId }) => bayId);
	const near = nodes.flatMap(({ nearBayIds }) => nearBayIds);
	const toMs = hourMs + HOUR_MS;
	const [references, readings, entries, spans, fired] = await Promise.all([
		inputs.references(sql, ids, toMs),
		inputs.readings(sql, ids, hourMs, toMs),
		inputs.states(sql, [...new Set([...bays, ...near])], hourMs, toMs),
		inputs.closures(sql, bays, hourMs, toMs),
		inputs.pulses(sql, ids, hourMs, toMs)
	]);
	const rows = byKey(readings, (r) => r.nodeId);
	const states = byKey(entries, (r) => r.bayId);
	const closed = byKey(spans, (r) => r.bayId);
	const pulses = byKey(fired, (r) => r.nodeId);
	return nodes.flatMap((node) => {
		const reference = references.get(node.id);
		if (reference === undefined) return [];
		return [
			inputOf(
				{ node, hourMs, reference },
				{
					rows: rows.get(node.id) ?? [],
					states: states.get(node.bayId) ?? [],
					near: node.nearBayIds.map((bayId) => states.get(bayId) ?? []),
					closed: closed.get(node.bayId) ?? [],
					pulses: pulses.get(node.id) ?? []
				},
				known
			)
		];
	});
}

interface Where {
	node: SiteNode;
	hourMs: number;
	reference: inputs.ReferenceInForce;
}
interface Read {
	rows: readonly inputs.HourRow[];
	states: readonly inputs.StateRow[];
	/** The same of each bay beside it. */
	near: readonly (readonly inputs.StateRow[])[];
	closed: readonly inputs.ClosedSpan[];
	pulses: readonly inputs.DriftPulse[];
}

function inputOf(where: Where, read: Read, known: Known): NodeInput {
	const { node, hourMs, reference } = where;
	const { bytes, fresh, offsetMg } = memoryFor(where, known);
	const fromMs = Math.max(hourMs, node.placedAtMs, reference.atMs);
	const pulses = read.pulses.filter(({ atMs }) => atMs >= fromMs);
	// A pulse may move the level: what comes after it in this hour would mix two of them.
	const toMs = Math.min(hourMs + HOUR_MS, pulses[0]?.atMs ?? Infinity);
	const states = read.states.filter(({ atMs }) => atMs >= node.placedAtMs);
	const open = (span: { fromMs: number; toMs: number }) =>
		without(stretchesOf(states, span, read.near), read.closed);
	const rows = read.rows.filter(({ atMs }) => atMs >= node.placedAtMs);
	const raw = rows.map((row): RawRow => toRaw(row, node));
	const isVacantAt = (atMs: number) =>
		open({ fromMs: hourMs, toMs: hourMs + HOUR_MS }).some(
			(s) => s.stay === null && atMs >= s.fromMs && atMs < s.toMs
		);
	return {
		node,
		memory: bytes,
		fresh,
		record: nodeHour(hourMs, raw, open({ fromMs, toMs }), offsetMg),
		pulses: pulses.map((pulse) => ({ ...pulse, vacant: isVacantAt(pulse.atMs) })),
		lastClippedAtMs: newest(rows.filter(({ flags }) => (flags & CLIPPED) !== 0)),
		lastOverFilmAtMs: newest(
			raw.filter(({ rawMg }) => magnitude(subtract(rawMg, offsetMg)) > node.profile.filmSafeMg)
		)
	};
}

const newest = (rows: readonly { atMs: number }[]): number | null => rows.at(-1)?.atMs ?? null;

const toRaw = ({ atMs, x, y, z, polarity, tempDc }: inputs.HourRow, { profile }: SiteNode) => ({
	atMs,
	rawMg: countsToMg([x, y, z], profile),
	polarity,
	tempC: tempDc === null ? null : tempDc / 10
});

/** What is remembered, or a beginning at the reference in force; a former one of this sensor keeps its slope. */
function memoryFor(
	{ node, reference }: Where,
	{ memories, lineMg }: Known
): { bytes: Uint8Array; fresh: boolean; offsetMg: Vec3 } {
	const stored = memories.get(node.id);
	const former = stored === undefined ? null : readMemory(stored.memory);
	if (former !== null && former.referenceId === reference.id && stored !== undefined)
		return { bytes: stored.memory, fresh: false, offsetMg: offsetOf(former) };
	const { atMs, fieldMg, offsetMg, tempC } = reference;
	const begin = { atMs, fieldMg, offsetMg, tempC, ...(lineMg === null ? {} : { lineMg }) };
	const memory: DriftMemory = {
		referenceId: reference.id,
		drift: startDrift(begin, node.profile.sensitivityTempcoPerC, former?.drift ?? null),
		film: former?.film ?? { lastPulseAtMs: null, lastClippedAtMs: null, lastOverFilmAtMs: null }
	};
	return { bytes: packMemory(memory), fresh: true, offsetMg: offsetOf(memory) };
}

/** A memory of another version's layout is as good as none: drift begins at the reference. */
function readMemory(bytes: Uint8Array): DriftMemory | null {
	try {
		return unpackMemory(bytes);
	} catch (error) {
		if (error instanceof RangeError) return null;
		throw error;
	}
}

/** The offset in use: of the last pair, else of the reference. */
export const offsetOf = ({ drift }: DriftMemory): Vec3 =>
	drift.pairs.any?.offsetMg ?? drift.reference.offsetMg ?? ZERO;
