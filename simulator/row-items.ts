import type { Delivered } from './delivery';
import type { Sent } from './node-state';
import type { Counts3 } from '$lib/wire/types';

/** One row as detection wants it, in counts; `atMs` is true time. */
export interface GeneratedRow {
	nodeIndex: number;
	atMs: number;
	boot: number;
	seq: number;
	row: number;
	counts: Counts3;
	polarity: 1 | -1;
	tempC: number | null;
}

/** The rows of one message; empty for hello, pair and ack. */
export function rowItems(message: Sent | Delivered): GeneratedRow[] {
	const { frame, nodeIndex, firstAtMs } = message;
	if (frame.kind !== 'reading') return [];
	return frame.rows.map((row, i) => {
		const tempDc = row.tempDc ?? frame.tempDc;
		return {
			nodeIndex,
			atMs: firstAtMs + row.dtMs,
			boot: frame.boot,
			seq: frame.seq,
			row: i,
			counts: row.counts,
			polarity: frame.polarity,
			tempC: tempDc === null ? null : tempDc / 10
		};
	});
}
