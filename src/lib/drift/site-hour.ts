import { closeHour, voteOf, type NodeDrift } from './node-drift';
import type { DriftSettings } from './params';
import { siteLine, type SiteLine } from './site-line';
import type { HourParts, HourRecord } from './types';

export interface NodeHour {
	nodeId: number;
	drift: NodeDrift;
	hour: HourRecord;
}

export interface ClosedNode {
	nodeId: number;
	drift: NodeDrift;
	/** Null for an occupied hour. */
	parts: HourParts | null;
}

/**
 * Closes one hour of a whole site: all nodes that have one give their votes, the line is drawn, and each hour
 * is taken apart with it. Nodes without still readings are left out. Constant cost an hour a node.
 */
export function closeSiteHour(
	nodes: readonly NodeHour[],
	settings: DriftSettings
): { line: SiteLine; closed: ClosedNode[] } {
	const votes = nodes.map(({ drift, hour }) => voteOf(drift, hour)).filter((vote) => vote !== null);
	const line = siteLine(votes, settings);
	const closed = nodes.map(({ nodeId, drift, hour }) => ({
		nodeId,
		...closeHour(drift, hour, line, settings)
	}));
	return { line, closed };
}
