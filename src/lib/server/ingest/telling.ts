import type { HistoryEntry, HistoryType } from '$lib/detection/types';
import type { NewEvent } from '$lib/server/store/queries/changes';
import type { NewHistory } from '$lib/server/store/queries/history';
import type { NodeEntry } from './node-entry';

/** History told this much after it was decided came late: a backlog, not the street. */
const LATE_MS = 60_000;

export const keyOf = (bayId: number, type: HistoryType, atMs: number): string =>
	`${bayId}:${type}:${atMs}`;

/** An entry about to be written: its event, if it gets one, is told in the same transaction. */
export interface Draft {
	siteId: number;
	nodeId: number;
	row: NewHistory;
	/** null: the feed has told it already (`row.eventId`), or it never took effect. */
	event: NewEvent | null;
}

/** An event without history: what a silence tells, and what voids an earlier event. */
export interface Loose {
	siteId: number;
	event: NewEvent;
	/** Given the event's id once it is known. */
	told?: (eventId: number) => void;
}

export const twentieths = (confidence: number | null): number | null =>
	confidence === null ? null : Math.round(confidence * 20);

/** Evidence names nodes as `{node:12}`; people know bays. */
export function evidenceText(
	evidence: HistoryEntry['evidence'],
	bayOf: (nodeId: number) => string | null
): string {
	const named = (text: string) =>
		text.replace(/\{node:(\d+)\}/g, (_, id: string) => {
			const bay = bayOf(Number(id));
			return bay === null ? 'the neighbour' : `bay ${bay}`;
		});
	return JSON.stringify({
		because: evidence.because.map(named),
		against: evidence.against.map(named)
	});
}

export function draftOf(
	entry: NodeEntry,
	bayId: number,
	told: HistoryEntry,
	when: { stampMs: number; nowMs: number; late: boolean },
	evidence: string
): Draft {
	const common = {
		bayId,
		atMs: told.atMs,
		type: told.type,
		state: told.state,
		confidence20: twentieths(told.confidence),
		uncertaintyS: Math.round(told.uncertaintyS),
		evidence
	};
	return {
		siteId: entry.config.siteId,
		nodeId: entry.id,
		row: {
			...common,
			decidedAtMs: told.decidedAtMs,
			voidedAtMs: null,
			recordedAtMs: when.stampMs,
			voidRecordedAtMs: null,
			eventId: null
		},
		event: {
			...common,
			nodeId: entry.id,
			late: when.late || when.nowMs - told.decidedAtMs > LATE_MS,
			voids: null
		}
	};
}

/** The event that says another did not happen. It repeats what it voids, so that readers see what fell. */
export const voiding = (
	nodeId: number,
	row: Pick<NewHistory, 'bayId' | 'state' | 'atMs' | 'uncertaintyS'>,
	eventId: number,
	late: boolean,
	why: string | null
): NewEvent => ({
	bayId: row.bayId,
	nodeId,
	type: 'voided',
	state: row.state,
	atMs: row.atMs,
	confidence20: null,
	uncertaintyS: row.uncertaintyS,
	late,
	voids: eventId,
	evidence: why === null ? null : JSON.stringify({ because: [why], against: [] })
});
