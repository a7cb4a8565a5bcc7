import type { BayView } from '$lib/schemas/v1/bays';
import type { Polygon } from '$lib/schemas/v1/geojson';
import type { BayViewRow, RunningClosure } from '$lib/server/store/queries/bays';
import { rfc3339, rfc3339OrNull } from './time';

/** Twentieths to a share without binary crumbs: 0.05 steps. */
export const confidenceOf = (confidence20: number | null): number | null =>
	confidence20 === null ? null : Math.round(confidence20 * 5) / 100;

export const listOf = (text: string | null): string[] =>
	(text ?? '').split(',').filter((word) => word !== '');

/** A row of bay and state as readers are told it. */
export function bayView(row: BayViewRow, closed: RunningClosure | undefined): BayView {
	const { doubtReason, doubtSinceMs, lastKnownState, lastKnownAtMs } = row;
	const state = row.state ?? 'unknown';
	return {
		code: row.code,
		zone: row.zone,
		state,
		since: rfc3339OrNull(row.sinceMs),
		confidence: state === 'unknown' ? null : confidenceOf(row.confidence20),
		doubt: doubtReason === null ? null : { reason: doubtReason, since: rfc3339(doubtSinceMs ?? 0) },
		condition: row.condition ?? 'unplaced',
		also: listOf(row.also),
		lastKnown:
			lastKnownState === null ? null : { state: lastKnownState, at: rfc3339(lastKnownAtMs ?? 0) },
		closed:
			closed === undefined
				? null
				: { from: rfc3339(closed.fromMs), to: rfc3339(closed.toMs), reason: closed.reason },
		node: row.serial
	};
}

export function evidenceOf(text: string | null): { because: string[]; against: string[] } {
	const none = { because: [], against: [] };
	return text === null ? none : { ...none, ...(JSON.parse(text) as typeof none) };
}

export const geometryOf = (text: string | null): Polygon | null =>
	text === null ? null : (JSON.parse(text) as Polygon);

/** RFC 7946: the bay's code is the feature's id, everything else a property. */
export const featureOf = (row: BayViewRow, view: BayView) => ({
	type: 'Feature' as const,
	id: view.code,
	geometry: geometryOf(row.geometry),
	properties: { ...view, personal: row.personal }
});
