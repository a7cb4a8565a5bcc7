import type { PulseItem, RowItem } from '$lib/detection/types';
import { countsToMg, isClipped } from '$lib/magnetics/counts';
import type { SensorProfile } from '$lib/magnetics/sensor-profile';
import type { Vec3 } from '$lib/magnetics/vector';
import type { PulseRow } from '$lib/server/store/queries/pulses';
import type { ReadingRow } from '$lib/server/store/queries/readings';
import type { AckFrame, HelloFrame, PairFrame, ReadingFrame } from '$lib/wire/types';
import { FLAG } from '../clock';
import type { CheckedMessage } from './check';

/** A temperature says nothing of rows further from it than this (method 5). */
const TEMP_REACH_MS = 300_000;

/** Key 6 holds for the time of sending, so for the newest rows of a long message. */
function tempOf(frame: ReadingFrame, row: ReadingFrame['rows'][number]): number | null {
	if (row.tempDc !== null) return row.tempDc;
	const lastDtMs = frame.rows.at(-1)?.dtMs ?? 0;
	return lastDtMs - row.dtMs <= TEMP_REACH_MS ? frame.tempDc : null;
}

/** The rows of a reading as they are stored. */
export function readingRows(checked: CheckedMessage, frame: ReadingFrame): ReadingRow[] {
	const { entry, time } = checked;
	const flags = time.flags | (frame.unsigned ? FLAG.unsigned : 0);
	return frame.rows.map((row, i) => ({
		nodeId: entry.id,
		atMs: time.baseMs + row.dtMs,
		boot: frame.boot,
		seq: frame.seq,
		row: i,
		x: row.counts[0],
		y: row.counts[1],
		z: row.counts[2],
		polarity: frame.polarity,
		tempDc: tempOf(frame, row),
		batteryMv: i === 0 ? frame.batteryMv : null,
		rssiDbm: i === 0 ? frame.rssiDbm : null,
		flags: flags | (isClipped(row.counts, entry.config.profile) ? FLAG.clipped : 0)
	}));
}

const core = (checked: CheckedMessage) => ({
	nodeId: checked.entry.id,
	boot: checked.frame.boot,
	seq: checked.frame.seq,
	atMs: checked.time.baseMs
});

/** A pair ends with a SET; the reset before it only measures (protocol, `pair`). */
export const pairPulse = (checked: CheckedMessage, frame: PairFrame): PulseRow => ({
	...core(checked),
	source: 'pair',
	set: frame.set,
	reset: frame.reset,
	before: frame.before,
	after: frame.after,
	polarityAfter: 1,
	tempDc: frame.tempDc,
	batteryMv: frame.batteryMv,
	commandId: frame.commandId
});

/** Power-on performs a SET (method 2). */
export const helloPulse = (checked: CheckedMessage, frame: HelloFrame): PulseRow => ({
	...core(checked),
	source: 'hello',
	set: null,
	reset: null,
	before: frame.before,
	after: frame.after,
	polarityAfter: 1,
	tempDc: frame.tempDc,
	batteryMv: frame.batteryMv,
	commandId: null
});

/** The pulse that a `set` or `reset` command fired. */
export const ackPulse = (
	checked: CheckedMessage,
	frame: AckFrame,
	verb: 'set' | 'reset'
): PulseRow => ({
	...core(checked),
	source: 'ack',
	set: null,
	reset: null,
	before: frame.before,
	after: frame.after,
	polarityAfter: verb === 'set' ? 1 : -1,
	tempDc: null,
	batteryMv: null,
	commandId: frame.commandId
});

/** A stored row as detection takes it: the same for live rows and for those read back. */
export function rowItem(row: ReadingRow, profile: SensorProfile): RowItem {
	return {
		kind: 'row',
		nodeId: row.nodeId,
		atMs: row.atMs,
		boot: row.boot,
		seq: row.seq,
		row: row.row,
		rawMg: countsToMg([row.x, row.y, row.z], profile),
		polarity: row.polarity,
		tempC: row.tempDc === null ? null : row.tempDc / 10,
		clipped: (row.flags & FLAG.clipped) !== 0
	};
}

export function pulseItem(pulse: PulseRow, profile: SensorProfile): PulseItem {
	const mg = (counts: Vec3 | null) => (counts === null ? null : countsToMg(counts, profile));
	return {
		kind: 'pulse',
		nodeId: pulse.nodeId,
		atMs: pulse.atMs,
		boot: pulse.boot,
		seq: pulse.seq,
		source: pulse.source,
		setMg: mg(pulse.set),
		resetMg: mg(pulse.reset),
		before:
			pulse.before === null
				? null
				: {
						polarity: pulse.before.polarity,
						rawMg: countsToMg(pulse.before.counts, profile)
					},
		afterMg: mg(pulse.after),
		polarityAfter: pulse.polarityAfter,
		tempC: pulse.tempDc === null ? null : pulse.tempDc / 10
	};
}
