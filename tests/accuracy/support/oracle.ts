import { bayTime, type BayTimes, type TimeCount } from '$lib/accuracy/time-share';
import type { Generated } from '../../../simulator/generate';
import { apartAt, apartWindows, staysOf } from './apart';
import { serverTimes } from './server-times';

const GRACE_MS = 900_000;

type Said = BayTimes['said'][number];

/** What was really so at a bay: vacant from the start, then its stays. */
export function truthOf({ truth }: Generated, bayIndex: number): BayTimes['truth'][number][] {
	return [
		{ atMs: truth.fromMs, state: 'vacant' as const },
		...staysOf(truth.stays, bayIndex).flatMap((stay) => [
			{ atMs: stay.fromMs, state: 'occupied' as const },
			{ atMs: stay.toMs, state: 'vacant' as const }
		])
	];
}

/** The true times of the rows that were heard of a node and move its state, in order. */
function heardAtMs(generated: Generated, nodeIndex: number): Float64Array {
	const log = generated.logs[nodeIndex]!;
	const heard: number[] = [];
	serverTimes(generated, nodeIndex).forEach((ms, m) => {
		if (Number.isNaN(ms)) return;
		const from = log.rowFrom.values[m]!;
		for (let row = from; row < from + log.rowCount.values[m]!; row++) {
			heard.push(log.firstAtMs.values[m]! + log.dtMs.values[row]!);
		}
	});
	return Float64Array.from(heard).sort();
}

/** Rows nearer than this belong to one burst, which the change itself set off. */
const BURST_MS = 5000;

/**
 * What would be said by one who knows the truth at every row heard and nothing between: a change lies at the
 * first row of its burst, else in the middle of its two rows, and over the grace time the state is not known
 * (method 4). No detector can be expected to be right for much more of the time.
 */
function saidByOracle(generated: Generated, nodeIndex: number): Said[] {
	const truth = truthOf(generated, generated.plan.nodes[nodeIndex]!.bayIndex);
	const said: Said[] = [];
	let t = 0;
	let lastMs = NaN;
	let lastState: Said['state'] = 'unknown';
	const heard = heardAtMs(generated, nodeIndex);
	heard.forEach((atMs, i) => {
		while ((truth[t + 1]?.atMs ?? Infinity) <= atMs) t++;
		const { state } = truth[t]!;
		const silent = atMs - lastMs > GRACE_MS;
		if (silent) said.push({ atMs: lastMs + GRACE_MS, state: 'unknown' });
		if (silent || state !== lastState) {
			const burst = heard[i + 1]! - atMs < BURST_MS;
			const sharp = silent || burst || Number.isNaN(lastMs);
			said.push({ atMs: sharp ? atMs : (lastMs + atMs) / 2, state });
		}
		lastMs = atMs;
		lastState = state;
	});
	return said;
}

/** Time of all bays that count in which that oracle would be right, wrong, or say nothing. */
export function oracleTime(generated: Generated): TimeCount {
	const { judgedFromMs, toMs } = generated.truth;
	const sum: TimeCount = { rightMs: 0, wrongMs: 0, unknownMs: 0 };
	generated.plan.nodes.forEach(({ bayIndex }, nodeIndex) => {
		if (apartAt(apartWindows(generated, bayIndex), toMs) !== null) return;
		const said = saidByOracle(generated, nodeIndex);
		const count = bayTime({ truth: truthOf(generated, bayIndex), said }, judgedFromMs, toMs);
		sum.rightMs += count.rightMs;
		sum.wrongMs += count.wrongMs;
		sum.unknownMs += count.unknownMs;
	});
	return sum;
}
