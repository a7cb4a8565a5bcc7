import { packMemory, unpackMemory, type DriftMemory } from '$lib/drift/codec';
import { writeFilmBack } from '$lib/drift/decompose';
import { applyPair, applyPulse, closeHour, HEALED_MG } from '$lib/drift/node-drift';
import { pairDue, type PairRule } from '$lib/drift/pair-rule';
import { filmOf, type Diagnosis } from '$lib/drift/pairs';
import type { DriftSettings } from '$lib/drift/params';
import type { SiteLine } from '$lib/drift/site-line';
import { refreshNeedOf } from '$lib/drift/summary';
import type { HourParts, PairRecord } from '$lib/drift/types';
import { countsToMg } from '$lib/magnetics/counts';
import type { SensorProfile } from '$lib/magnetics/sensor-profile';
import { pairField, pairOffset } from '$lib/magnetics/set-reset';
import { add, magnitude, ZERO, type Vec3 } from '$lib/magnetics/vector';
import type { StoredHour } from '$lib/server/store/queries/drift-hours';
import type { DriftPulse } from '$lib/server/store/queries/drift-inputs';
import type { PairRow } from '$lib/server/store/queries/drift-pairs';
import type { MemoryRow } from '$lib/server/store/queries/drift-state';
import { HOUR_MS, type NodeInput } from './node-hours';

/** What closing one hour of one node writes. */
export interface TakenHour {
	memory: MemoryRow;
	hour: StoredHour | null;
	pairs: PairRow[];
	/** Film losses that pulses measured: to be written into the hours since the drift began. */
	films: { filmMg: Vec3; sinceMs: number; pulseMs: number }[];
}

interface Around {
	siteId: number;
	hourMs: number;
	line: SiteLine;
	settings: DriftSettings;
	rule: PairRule;
}

/** A pair as drift takes it; null without both readings. */
export function pairRecord(
	pulse: DriftPulse & { vacant: boolean },
	profile: SensorProfile
): PairRecord | null {
	const { set, reset, before } = pulse;
	if (pulse.source !== 'pair' || !pulse.accepted || set === null || reset === null) return null;
	return {
		atMs: pulse.atMs,
		setMg: countsToMg(set, profile),
		resetMg: countsToMg(reset, profile),
		before:
			before === null
				? null
				: { polarity: before.polarity, rawMg: countsToMg(before.counts, profile) },
		tempC: pulse.tempC,
		vacant: pulse.vacant
	};
}

export function pairRow(
	pulse: DriftPulse,
	pair: PairRecord,
	diagnosis: Diagnosis | null,
	settled: boolean
): PairRow {
	return {
		...{ nodeId: pulse.nodeId, boot: pulse.boot, seq: pulse.seq, atMs: pulse.atMs },
		...{ vacant: pair.vacant, settled, tempC: pair.tempC },
		fieldMg: pairField(pair.setMg, pair.resetMg),
		offsetMg: pairOffset(pair.setMg, pair.resetMg),
		filmMg: filmOf(pair),
		bridgeChangeMg: diagnosis?.bridgeChangeMg ?? null,
		surroundingsChangeMg: diagnosis?.surroundingsChangeMg ?? null,
		named: diagnosis?.named ?? null
	};
}

/** Closes the hour of one node; null when it had nothing to say and nothing befell it. */
export function takeHour(input: NodeInput, around: Around): TakenHour | null {
	const { node, record, pulses, fresh } = input;
	const { hourMs, line, settings } = around;
	const clean = input.lastClippedAtMs === null && input.lastOverFilmAtMs === null;
	if (record === null && pulses.length === 0 && !fresh && clean) return null;
	const memory = unpackMemory(input.memory);
	const { film } = memory;
	film.lastClippedAtMs = input.lastClippedAtMs ?? film.lastClippedAtMs;
	film.lastOverFilmAtMs = input.lastOverFilmAtMs ?? film.lastOverFilmAtMs;
	let parts: HourParts | null = null;
	if (record !== null) {
		const closed = closeHour(memory.drift, record, line, settings);
		({ parts } = closed);
		memory.drift = closed.drift;
	}
	const taken = pulses.map((pulse) => takePulse(memory, pulse, input, settings));
	const films = taken.flatMap(({ film: lost }) => lost ?? []);
	const bytes = packMemory(memory);
	const of = { nodeId: node.id, placedAtMs: node.placedAtMs };
	return {
		memory: flagged(unpackMemory(bytes), bytes, of, around, hourMs + HOUR_MS),
		hour: record === null ? null : explained({ nodeId: node.id, record, parts }, films),
		pairs: taken.flatMap(({ row }) => row ?? []),
		films
	};
}

/** A pulse of this very hour explains it too. */
const explained = (hour: StoredHour, films: TakenHour['films']): StoredHour =>
	films.reduce((known, film) => withFilm([known], film)[0] ?? known, hour);

/** A memory with the flags that conditions and the pair rule read. */
export function flagged(
	memory: DriftMemory,
	bytes: Uint8Array,
	node: { nodeId: number; placedAtMs: number },
	{ siteId, settings, rule }: Pick<Around, 'siteId' | 'settings' | 'rule'>,
	nowMs: number
): MemoryRow {
	const need = refreshNeedOf(memory, settings, null);
	const { drift } = memory;
	const { reference, pairs } = drift;
	// A reference with an offset was learned beside a pair.
	const learnedMs = reference.offsetMg === null ? null : reference.atMs;
	const chance = { nowMs, lastPairAtMs: pairs.any?.atMs ?? learnedMs, quiet: true };
	return {
		...{ ...node, siteId, memory: bytes },
		driftingSinceMs: drift.watch.driftingSinceMs,
		refreshSinceMs: need.due ? Math.min(...need.reasons.map(({ sinceMs }) => sinceMs)) : null,
		pairWanted: pairDue(rule, drift, chance, settings)
	};
}

function takePulse(
	memory: DriftMemory,
	pulse: NodeInput['pulses'][number],
	{ node }: NodeInput,
	settings: DriftSettings
): { row: PairRow | null; film: TakenHour['films'][number] | null } {
	memory.film.lastPulseAtMs = pulse.atMs;
	const pair = pairRecord(pulse, node.profile);
	if (pair === null) {
		memory.drift = applyPulse(memory.drift);
		return { row: null, film: null };
	}
	const { beganMs, driftingSinceMs } = memory.drift.watch;
	const { drift, diagnosis } = applyPair(memory.drift, pair, settings);
	memory.drift = drift;
	const row = pairRow(pulse, pair, diagnosis, true);
	const { filmMg } = row;
	const sinceMs = beganMs ?? driftingSinceMs;
	if (filmMg === null || sinceMs === null || magnitude(filmMg) < HEALED_MG)
		return { row, film: null };
	return { row, film: { filmMg, sinceMs, pulseMs: pulse.atMs } };
}

/** Hours of one node with a measured film loss written into them (method 5.5). */
export function withFilm(
	hours: readonly StoredHour[],
	{ filmMg, sinceMs, pulseMs }: TakenHour['films'][number]
): StoredHour[] {
	return hours.flatMap((hour) => {
		if (hour.parts === null) return [];
		// Hours kept from an earlier closing hold it already: told twice it would be taken out twice.
		const plain = {
			...hour.parts,
			unexplainedMg: add(hour.parts.unexplainedMg, hour.parts.filmMg)
		};
		const [parts] = writeFilmBack([{ ...plain, filmMg: ZERO }], filmMg, sinceMs, pulseMs);
		return parts === undefined ? [] : [{ ...hour, parts }];
	});
}
