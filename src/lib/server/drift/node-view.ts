import type { z } from 'zod';
import type { DriftMemory } from '$lib/drift/codec';
import type { DriftSettings } from '$lib/drift/params';
import { ewmaForPeople, type DaysToLimit } from '$lib/drift/rate';
import { rateLength } from '$lib/drift/summary';
import { CAUSE_WORDS } from '$lib/drift/words';
import { magnitude } from '$lib/magnetics/vector';
import type { DriftPair, NodeDriftView } from '$lib/schemas/desk-drift';
import type { nodeDrift } from '$lib/schemas/v1/drift';
import { rfc3339 } from '$lib/server/api/time';
import type { Sql } from '$lib/server/store/queries/bulk';
import * as driftHours from '$lib/server/store/queries/drift-hours';
import * as pairs from '$lib/server/store/queries/drift-pairs';
import * as state from '$lib/server/store/queries/drift-state';
import * as views from '$lib/server/store/queries/drift-view';
import { HOUR_MS } from './node-hours';
import {
	lengthMg,
	memoryOf,
	rounded,
	roundedDays,
	roundedVector,
	rowView,
	summaryOf,
	vectorsOf
} from './row-view';
import { settingsAt } from './site-nodes';

const MOST_PAIRS = 60;

interface Wanted {
	node: { id: number; siteId: number; serial: string };
	hours: number;
	nowMs: number;
}

interface Known {
	row: views.ViewRow | null;
	memory: DriftMemory | null;
	settings: DriftSettings;
	hours: driftHours.StoredHour[];
}

async function read(sql: Sql, { node, hours, nowMs }: Wanted): Promise<Known> {
	const row = await views.ofNode(sql, node.id);
	const settings = (await settingsAt(sql, node.siteId, nowMs)).of(node.id);
	const toMs = (await state.siteOf(sql, node.siteId))?.closedToMs ?? nowMs;
	return {
		...{ row, settings, memory: row === null ? null : memoryOf(row) },
		hours: await driftHours.ofNode(sql, node.id, toMs - hours * HOUR_MS, toMs)
	};
}

/** `GET /api/v1/nodes/{serial}/drift`. */
export async function driftAnswer(sql: Sql, wanted: Wanted): Promise<z.infer<typeof nodeDrift>> {
	const { row, memory, settings, hours } = await read(sql, wanted);
	const told = hours.flatMap(({ record, parts }) =>
		parts === null
			? []
			: [
					{
						...{ at: rfc3339(record.hourMs), tempC: record.tempC, n: record.n },
						...{ unexplainedMg: lengthMg(parts.unexplainedMg), vectors: vectorsOf(parts) }
					}
				]
	);
	if (row === null || memory === null) return { ...NOTHING, hours: told };
	const { parts, rate, daysToLimit, drifting, refresh, cause } = summaryOf(row, memory, settings);
	return {
		sinceReference: parts === null ? null : lengths(parts),
		vectors: parts === null ? null : vectorsOf(parts),
		ratePerDayMg: rate === null ? null : rounded(rateLength(rate) ?? 0),
		daysToLimit: daysOf(daysToLimit),
		drifting: drifting === null ? null : { since: rfc3339(drifting.sinceMs), by: drifting.by },
		refresh: {
			due: refresh.due,
			reasons: refresh.reasons.map(({ reason, sinceMs }) => ({ reason, since: rfc3339(sinceMs) }))
		},
		cause: cause === null ? null : { cause: cause.cause, magnitudeMg: rounded(cause.magnitudeMg) },
		notes: [...(parts?.notes ?? [])],
		hours: told
	};
}

const NOTHING = {
	...{ sinceReference: null, vectors: null, ratePerDayMg: null, daysToLimit: null },
	...{ drifting: null, refresh: { due: false, reasons: [] }, cause: null, notes: [] }
};

const daysOf = (days: DaysToLimit | null) => (days === null ? null : roundedDays(days));

const lengths = (parts: Parameters<typeof vectorsOf>[0]) => ({
	totalMg: lengthMg(parts.totalMg),
	temperatureMg: lengthMg(parts.temperatureMg),
	geomagneticMg: lengthMg(parts.geomagneticMg),
	bridgeMg: lengthMg(parts.bridgeMg),
	filmMg: lengthMg(parts.filmMg),
	surroundingsMg: lengthMg(parts.surroundingsMg),
	unexplainedMg: lengthMg(parts.unexplainedMg)
});

/** What the dossier and the Drift board show of one node. */
export async function nodeDriftView(
	sql: Sql,
	site: string,
	wanted: Wanted
): Promise<NodeDriftView> {
	const { row, memory, settings, hours } = await read(sql, wanted);
	const { driftingMg, refreshMg, refreshHours } = settings;
	return {
		...{ serial: wanted.node.serial, site },
		row: row === null ? null : rowView(row, settings),
		limits: { driftingMg, refreshMg, refreshHours },
		reference: referenceView(memory),
		slope: slopeView(memory),
		hours: hours.map(({ record, parts }) => ({
			...{ at: rfc3339(record.hourMs), tempC: record.tempC, n: record.n },
			occupied: record.stay !== null,
			vectors: parts === null ? null : vectorsOf(parts),
			errorMg: parts === null || parts.errorMg === null ? null : roundedVector(parts.errorMg),
			notes: [...(parts?.notes ?? [])]
		})),
		chart: chartView(memory, settings),
		scatter: hours.flatMap(({ parts }): NodeDriftView['scatter'] => {
			if (parts === null || parts.tempC === null) return [];
			const [x, y, z] = roundedVector(parts.totalMg);
			return [[parts.tempC, x, y, z]];
		}),
		pairs: (await pairs.ofNode(sql, wanted.node.id, MOST_PAIRS)).map(pairView)
	};
}

function referenceView(memory: DriftMemory | null): NodeDriftView['reference'] {
	if (memory === null) return null;
	const { atMs, fieldMg, offsetMg, tempC } = memory.drift.reference;
	return {
		...{ at: rfc3339(atMs), fieldMg: roundedVector(fieldMg), tempC },
		offsetMg: offsetMg === null ? null : roundedVector(offsetMg)
	};
}

function slopeView(memory: DriftMemory | null): NodeDriftView['slope'] {
	const slope = memory?.drift.slope ?? null;
	if (slope === null) return null;
	const fine = (v: readonly [number, number, number]): [number, number, number] => [
		Math.round(v[0] * 1000) / 1000,
		Math.round(v[1] * 1000) / 1000,
		Math.round(v[2] * 1000) / 1000
	];
	return { perC: fine(slope.perC), errorPerC: fine(slope.errorPerC), triples: slope.triples };
}

function chartView(memory: DriftMemory | null, settings: DriftSettings): NodeDriftView['chart'] {
	const days = memory?.drift.watch.days ?? [];
	const axis = (i: 0 | 1 | 2) => {
		const chart = ewmaForPeople(days, i, settings);
		if (chart === null) return null;
		return {
			valuesMg: days.map(({ unexplainedMg }) => rounded(unexplainedMg[i])),
			averagesMg: chart.averages.map(rounded),
			...{ lowerMg: rounded(chart.lower), upperMg: rounded(chart.upper) }
		};
	};
	const [x, y, z] = [axis(0), axis(1), axis(2)];
	if (x === null || y === null || z === null) return null;
	return { days: days.map(({ dayMs }) => rfc3339(dayMs)), x, y, z };
}

function pairView(pair: pairs.ToldPair): DriftPair {
	const { filmMg, fieldMg, bridgeChangeMg, surroundingsChangeMg, named } = pair;
	const fieldLengthMg = magnitude(fieldMg);
	return {
		...{ at: rfc3339(pair.atMs), vacant: pair.vacant, cause: pair.cause, tempC: pair.tempC },
		fieldMg: roundedVector(fieldMg),
		offsetMg: roundedVector(pair.offsetMg),
		filmMg: filmMg === null ? null : roundedVector(filmMg),
		filmShare:
			filmMg === null || fieldLengthMg === 0
				? null
				: Math.round((magnitude(filmMg) / fieldLengthMg) * 1000) / 1000,
		bridgeChangeMg: bridgeChangeMg === null ? null : roundedVector(bridgeChangeMg),
		surroundingsChangeMg:
			surroundingsChangeMg === null ? null : roundedVector(surroundingsChangeMg),
		named:
			named === null
				? null
				: {
						...{ cause: named.cause, magnitudeMg: rounded(named.magnitudeMg) },
						says: CAUSE_WORDS[named.cause].says
					}
	};
}
