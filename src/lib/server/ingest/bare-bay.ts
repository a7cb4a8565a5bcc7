import type { NodeEntry } from './node-entry';
import type { SiteNews } from './steps/feed';

/** What is told of a bay that its node leaves: nothing is known of it any more. */
export function bareBay(
	entry: NodeEntry,
	bayId: number,
	condition: 'unplaced' | 'withdrawn',
	nowMs: number
): SiteNews {
	const { shown } = entry.live;
	const wasKnown = shown !== null && shown.state !== 'unknown';
	const now = {
		bayId,
		siteId: entry.config.siteId,
		nodeId: null,
		state: 'unknown' as const,
		sinceMs: nowMs,
		confidence20: null,
		doubtReason: null,
		doubtSinceMs: null,
		condition,
		also: '',
		lastKnownState: wasKnown ? shown.state : null,
		lastKnownAtMs: wasKnown ? nowMs : null,
		evidence: null
	};
	const event = {
		bayId,
		nodeId: entry.id,
		type: 'unknown' as const,
		state: 'unknown' as const,
		atMs: nowMs,
		confidence20: null,
		uncertaintyS: 0,
		late: false,
		voids: null,
		evidence: JSON.stringify({ because: ['its node left the bay'], against: [] })
	};
	return {
		events: wasKnown ? [{ event, told: () => undefined }] : [],
		shown: [{ entry, now, change: 'bay' }],
		other: []
	};
}
