import type { Vec3 } from '$lib/magnetics/vector';

/** One reading as a published detector gets it: field in mG with polarity and the first pair's offset taken out. */
export interface PublishedRow {
	atMs: number;
	fieldMg: Vec3;
}

/**
 * A detector of the literature at one node, by itself: no neighbours, no film, no temperature. `quietMg`
 * is the median field of the empty bay while it was commissioned, the same that ours learns from.
 */
export interface PublishedMethod {
	name: string;
	source: string;
	start(quietMg: Vec3): PublishedDetector;
}

export interface PublishedChange {
	type: 'arrival' | 'departure';
	atMs: number;
}

export interface PublishedDetector {
	/** The change of the bay's state that this row shows, else null. */
	take(row: PublishedRow): PublishedChange | null;
}
