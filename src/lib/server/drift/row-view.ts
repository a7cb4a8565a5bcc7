import type { z } from 'zod';
import { unpackMemory, type DriftMemory } from '$lib/drift/codec';
import type { DriftSettings } from '$lib/drift/params';
import { rateLength, summarize, type DriftSummary } from '$lib/drift/summary';
import type { HourParts } from '$lib/drift/types';
import { CAUSE_WORDS, NOTE_WORDS, REFRESH_WORDS, VISIT_WORDS } from '$lib/drift/words';
import { add, magnitude, type Vec3 } from '$lib/magnetics/vector';
import type { DriftArrow, DriftRow } from '$lib/schemas/desk-drift';
import type { condition } from '$lib/schemas/v1/bays';
import { listOf } from '$lib/server/api/bay-view';
import { rfc3339 } from '$lib/server/api/time';
import type { ViewRow } from '$lib/server/store/queries/drift-view';

export const rounded = (mg: number): number => Math.round(mg * 100) / 100;
export const roundedVector = (v: Vec3): [number, number, number] => [
	rounded(v[0]),
	rounded(v[1]),
	rounded(v[2])
];
export const lengthMg = (v: Vec3): number => rounded(magnitude(v));

export const vectorsOf = (parts: HourParts) => ({
	totalMg: roundedVector(parts.totalMg),
	temperatureMg: roundedVector(parts.temperatureMg),
	geomagneticMg: roundedVector(parts.geomagneticMg),
	bridgeMg: roundedVector(parts.bridgeMg),
	filmMg: roundedVector(parts.filmMg),
	surroundingsMg: roundedVector(parts.surroundingsMg),
	unexplainedMg: roundedVector(parts.unexplainedMg)
});

/** What is remembered of a node; null before its first closed hour, or by another version's layout. */
export function memoryOf({ memory }: ViewRow): DriftMemory | null {
	if (memory === null) return null;
	try {
		return unpackMemory(memory);
	} catch (error) {
		if (error instanceof RangeError) return null;
		throw error;
	}
}

/** The summary as it stands with what is shown: a pulse since the last closed hour has put things away. */
export function summaryOf(
	row: ViewRow,
	memory: DriftMemory,
	settings: DriftSettings
): DriftSummary {
	const names = new Set([row.condition ?? '', ...listOf(row.also)]);
	const since = row.changedAtMs ?? 0;
	const summary = summarize(memory, settings, names.has('inverted') ? since : null);
	const due = names.has('refresh_due') || names.has('inverted');
	const { reasons } = summary.refresh;
	// What detection saw since the last closed hour: only a strong field asks without being flipped.
	const seen =
		reasons.length > 0 ? reasons : [{ reason: 'over_film_limit' as const, sinceMs: since }];
	return {
		...summary,
		drifting: names.has('drifting') ? summary.drifting : null,
		refresh: { due, reasons: due ? seen : [] },
		next:
			due || !summary.refresh.due ? summary.next : 'wait: a pulse was fired, the next hour tells'
	};
}

/**
 * Displacement of the field: what neither temperature, geomagnetic change nor bridge explains. Node axes are
 * forward, right, down with x at the entered heading east of north.
 */
export function arrowOf(parts: HourParts, headingDeg: number | null): DriftArrow {
	const moved = add(parts.surroundingsMg, parts.unexplainedMg);
	const alongDeg = (Math.atan2(moved[1], moved[0]) * 180) / Math.PI;
	return {
		fieldMg: roundedVector(moved),
		lengthMg: lengthMg(moved),
		levelMg: rounded(Math.hypot(moved[0], moved[1])),
		bearingDeg: headingDeg === null ? null : Math.round((headingDeg + alongDeg + 720) % 360),
		downMg: rounded(moved[2])
	};
}

type Condition = z.infer<typeof condition>;

/** One row of the Drift board. */
export function rowView(row: ViewRow, settings: DriftSettings): DriftRow {
	const memory = memoryOf(row);
	const head = {
		...{ serial: row.serial, bay: row.bay, zone: row.zone },
		condition: (row.condition ?? 'unplaced') as Condition,
		also: listOf(row.also)
	};
	if (memory === null) return { ...head, ...NOTHING };
	const summary = summaryOf(row, memory, settings);
	const { parts, cause, rate, daysToLimit } = summary;
	return {
		...head,
		hour: parts === null ? null : rfc3339(parts.hourMs),
		partsMg: parts === null ? null : lengthsOf(parts),
		sureMg: summary.sureMg === null ? null : rounded(summary.sureMg),
		vectors: parts === null ? null : vectorsOf(parts),
		cause:
			cause === null
				? null
				: {
						cause: cause.cause,
						magnitudeMg: rounded(cause.magnitudeMg),
						says: CAUSE_WORDS[cause.cause].says,
						ordinary: cause.cause === 'temperature' || cause.cause === 'geomagnetic'
					},
		next: summary.next,
		notes: (parts?.notes ?? []).map((note) => ({ note, says: NOTE_WORDS[note] })),
		drifting:
			summary.drifting === null
				? null
				: { since: rfc3339(summary.drifting.sinceMs), by: summary.drifting.by },
		refresh: {
			due: summary.refresh.due,
			reasons: summary.refresh.reasons.map(({ reason, sinceMs }) => ({
				...{ reason, since: rfc3339(sinceMs), says: REFRESH_WORDS[reason] }
			}))
		},
		visit: summary.visit.map((reason) => VISIT_WORDS[reason]),
		ratePerDayMg: rate === null ? null : rounded(rateLength(rate) ?? 0),
		trend: rate?.trend ?? false,
		daysToLimit: daysToLimit === null ? null : roundedDays(daysToLimit),
		arrow: parts === null ? null : arrowOf(parts, row.headingDeg),
		lastPairAt: memory.drift.pairs.any === null ? null : rfc3339(memory.drift.pairs.any.atMs)
	};
}

const NOTHING = {
	...{ hour: null, partsMg: null, sureMg: null, vectors: null, cause: null },
	...{ next: 'nothing yet: no hour of the empty bay is judged', notes: [], drifting: null },
	...{ refresh: { due: false, reasons: [] }, visit: [], ratePerDayMg: null, trend: false },
	...{ daysToLimit: null, arrow: null, lastPairAt: null }
};

const lengthsOf = (parts: HourParts) => ({
	total: lengthMg(parts.totalMg),
	temperature: lengthMg(parts.temperatureMg),
	geomagnetic: lengthMg(parts.geomagneticMg),
	bridge: lengthMg(parts.bridgeMg),
	film: lengthMg(parts.filmMg),
	surroundings: lengthMg(parts.surroundingsMg),
	unexplained: lengthMg(parts.unexplainedMg)
});

const tenths = (days: number): number => Math.round(days * 10) / 10;

export const roundedDays = ({
	limitMg,
	from,
	to
}: {
	limitMg: number;
	from: number;
	to: number | null;
}) => ({ limitMg, from: tenths(from), to: to === null ? null : tenths(to) });
