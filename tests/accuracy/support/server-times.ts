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
	let newestBoot = 0;
	for (const i of order) {
		const m = message[i]!;
		// A duplicate is dropped before it is timed (protocol, server step 3).
		if (!Number.isNaN(times[m]!)) continue;
		const boot = log.boot.values[m]!;
		const lateBoot = boot < newestBoot;
		newestBoot = Math.max(newestBoot, boot);
		const placed = placeInTime(
			{ ...nodeTimes(log, m), lateBoot, arrivedAtMs: arrivedAtMs[i]! },
			skew
		);
		times[m] = (placed.flags & FLAG.unmoving) === 0 ? placed.baseMs : NaN;
	}
	return times;
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
