import { rankConditions, type RankedCondition } from '$lib/detection/conditions';
import type { NodeView } from '$lib/detection/types';
import type { ShownRow } from '$lib/server/store/queries/ingest';
import { MARK } from '$lib/server/store/queries/node-state';
import type { NodeEntry } from './node-entry';
import { evidenceText } from './telling';

/** A habit of this period or less is shown as fast reporting: it costs battery. */
const FAST_REPORT_S = 10;
/** A cell that recovers by less than this above the floor still counts as low. */
const CELL_HYSTERESIS_MV = 50;
/** Confidence moves in twentieths, and only when it has left the shown one by this much of a step. */
const HYSTERESIS_STEPS = 0.75;

/** Shown confidence in twentieths: it keeps its step until it has clearly left it. */
export function confidenceStep(confidence: number | null, shown: number | null): number | null {
	if (confidence === null) return null;
	const steps = confidence * 20;
	if (shown !== null && Math.abs(steps - shown) < HYSTERESIS_STEPS) return shown;
	return Math.round(steps);
}

function marksOf({ config, live }: NodeEntry): string[] {
	const marks: string[] = [];
	if ((live.marks & MARK.clockOff) !== 0) marks.push('clock_off');
	if (config.unsignedAllowed) marks.push('unsigned');
	if (isCellLow(live.batteryMv, config.profile.batteryFloorMv, live.shown)) marks.push('low_cell');
	if (config.periodS <= FAST_REPORT_S) marks.push('fast_reporting');
	return marks;
}

function isCellLow(batteryMv: number | null, floorMv: number, shown: ShownRow | null): boolean {
	if (batteryMv === null) return false;
	const was = shown?.also.split(',').includes('low_cell') ?? false;
	return batteryMv < floorMv + (was ? CELL_HYSTERESIS_MV : 0);
}

/** What a node's bay shows now: detection's view, silence over it, marks beside it. */
export function shownOf(
	entry: NodeEntry,
	bayId: number,
	view: NodeView,
	bayOf: (nodeId: number) => string | null
): ShownRow {
	const { config, live } = entry;
	const held: RankedCondition[] = [...view.conditions];
	if (live.silence.silent) held.push('silent');
	if (live.drift.refreshSinceMs !== null) held.push('refresh_due');
	if (live.drift.driftingSinceMs !== null) held.push('drifting');
	const [condition, ...others] = rankConditions(held);
	const lost = live.silence.unknown;
	const state = lost === null ? view.state : 'unknown';
	const lastKnown = lost === null ? view.lastKnown : lastKnownOf(view, live.pointer?.atMs ?? null);
	const confidence20 = lost === null ? shownStep(view, live.shown) : null;
	return {
		bayId,
		siteId: config.siteId,
		nodeId: entry.id,
		state,
		sinceMs: lost === null ? view.sinceMs : lost.atMs,
		confidence20,
		doubtReason: view.doubt?.reason.slice(0, 64) ?? null,
		doubtSinceMs: view.doubt?.sinceMs ?? null,
		condition: condition ?? 'in_service',
		also: [...others, ...marksOf(entry)].join(',').slice(0, 200),
		lastKnownState: state === 'unknown' ? (lastKnown?.state ?? null) : null,
		lastKnownAtMs: state === 'unknown' ? (lastKnown?.atMs ?? null) : null,
		evidence: evidenceText(view.evidence, bayOf)
	};
}

/**
 * A movement is judged within seconds: shown, its low confidence would be one more change of the bay for each. The
 * step shown stays until the state is another or the movement is over.
 */
function shownStep(view: NodeView, shown: ShownRow | null): number | null {
	const before = shown?.confidence20 ?? null;
	if (view.moving && before !== null && shown?.state === view.state) return before;
	return confidenceStep(view.confidence, before);
}

const lastKnownOf = (view: NodeView, heardToMs: number | null): NodeView['lastKnown'] =>
	view.state === 'unknown' || heardToMs === null
		? view.lastKnown
		: { state: view.state, atMs: heardToMs };

const CONDITION_FIELDS = ['condition', 'also'] as const;
const BAY_FIELDS = [
	'nodeId',
	'state',
	'sinceMs',
	'confidence20',
	'doubtReason',
	'doubtSinceMs',
	'lastKnownState',
	'lastKnownAtMs'
] as const;

/** What a reader would see change: evidence alone, with its figures, is no change. */
export function changeBetween(before: ShownRow | null, now: ShownRow): 'bay' | 'condition' | null {
	if (before === null || BAY_FIELDS.some((field) => before[field] !== now[field])) return 'bay';
	return CONDITION_FIELDS.some((field) => before[field] !== now[field]) ? 'condition' : null;
}
