import { FLAG, placeInTime } from '$lib/server/ingest/clock';
import { SkewWindow } from '$lib/server/ingest/skew';
import type { Generated } from '../../../simulator/generate';
import type { MessageLog } from '../../../simulator/message-log';

/** When the server takes each message of a node to have begun; NaN = stored but moves no state, or never heard. */
export function serverTimes(generated: Generated, nodeIndex: number): Float64Array {
	const log = generated.logs[nodeIndex]!;
	const { message, arrivedAtMs } = generated.deliveries[nodeIndex]!;
	const order = message.map((_, i) => i).sort((a, b) => arrivedAtMs[a]! - arrivedAtMs[b]!);
	const times = new Float64Array(log.count).fill(NaN);
	const skew = new SkewWindow();
	let newest = -1;
	for (const i of order) {
		const m = message[i]!;
		// What comes after the end has not come: later nothing but stragglers would tell the clock.
		if (arrivedAtMs[i]! > generated.truth.toMs) continue;
		// A duplicate is dropped before it is timed (protocol, server step 3).
		if (!Number.isNaN(times[m]!)) continue;
		// A log's places rise with (boot, seq).
		const behind = m < newest;
		newest = Math.max(newest, m);
		const placed = placeInTime(
			{ ...nodeTimes(log, m), behind, arrivedAtMs: arrivedAtMs[i]! },
			skew
		);
		times[m] = (placed.flags & FLAG.unmoving) === 0 ? placed.baseMs : NaN;
	}
	return times;
}

/**
 * Each node's messages in the order of the server's times, which is how the pipeline hands them on: without a
 * clock a message that came late stands at its arrival, after newer ones.
 */
export function inServerOrder(generated: Generated): { ordered: Generated; times: Float64Array[] } {
	const times = generated.logs.map((_, nodeIndex) => serverTimes(generated, nodeIndex));
	const deliveries = generated.deliveries.map(({ message, arrivedAtMs }, nodeIndex) => {
		const at = times[nodeIndex]!;
		const order = [...new Set(message)].filter((m) => !Number.isNaN(at[m]!));
		const earlier = (a: number, b: number) => (at[a] === at[b] ? a - b : at[a]! - at[b]!);
		return { message: order.sort(earlier), arrivedAtMs };
	});
	return { ordered: { ...generated, deliveries }, times };
}

function nodeTimes(log: MessageLog, m: number) {
	const offset = log.clockOffsetMs;
	const rows = log.rowCount.values[m]!;
	return {
		t: offset === null ? 0 : Math.round(log.firstAtMs.values[m]! + offset),
		sentMs: offset === null ? null : Math.round(log.sentAtMs.values[m]! + offset),
		lastDtMs: rows === 0 ? 0 : log.dtMs.values[log.rowFrom.values[m]! + rows - 1]!
	};
}
