import type { PulseItem, RowItem } from '$lib/detection/types';
import { countsToMg, isClipped } from '$lib/magnetics/counts';
import type { SensorProfile } from '$lib/magnetics/sensor-profile';
import type { Vec3 } from '$lib/magnetics/vector';
import type { GeneratedPulse, GeneratedRow } from '../../../simulator/items';

/** A generated row as the pipeline hands it to detection (method 1). */
export function rowItem(row: GeneratedRow, profile: SensorProfile): RowItem {
	return {
		kind: 'row',
		nodeId: row.nodeIndex,
		atMs: row.atMs,
		boot: row.boot,
		seq: row.seq,
		row: row.row,
		rawMg: countsToMg(row.counts, profile),
		polarity: row.polarity,
		tempC: row.tempC,
		clipped: isClipped(row.counts, profile)
	};
}

/** A pair, a boot's power-on SET, or the pulse that an ack answers, as the pipeline hands it on; null = no pulse. */
export function pulseItem(pulse: GeneratedPulse, profile: SensorProfile): PulseItem | null {
	const { frame } = pulse;
	const mg = (counts: Vec3 | null) => (counts === null ? null : countsToMg(counts, profile));
	if (frame.kind === 'ack' && frame.before === null) return null;
	return {
		kind: 'pulse',
		nodeId: pulse.nodeIndex,
		atMs: pulse.atMs,
		boot: frame.boot,
		seq: frame.seq,
		source: frame.kind,
		setMg: frame.kind === 'pair' ? mg(frame.set) : null,
		resetMg: frame.kind === 'pair' ? mg(frame.reset) : null,
		before:
			frame.before === null
				? null
				: {
						polarity: frame.before.polarity,
						rawMg: countsToMg(frame.before.counts, profile)
					},
		afterMg: mg(frame.after),
		polarityAfter: pulse.polarityAfter,
		tempC: frame.kind === 'ack' || frame.tempDc === null ? null : frame.tempDc / 10
	};
}
