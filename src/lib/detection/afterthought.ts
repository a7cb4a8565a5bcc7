import { carriedConfidence } from './confidence';
import { voidEntry } from './entries';
import { evidence } from './evidence';
import { depart, type Overlap } from './judge';
import {
	floats,
	touch,
	type Arrival,
	type Group,
	type Node,
	type Parted,
	type Step,
	type Triple
} from './state';
import { offMg, onMg } from './thresholds';
import { apart, shift3, size3, sumSize } from './vec';

/** A departure that leaves this share of its arrival, or as much field, is one that may be taken back. */
const REST_SHARE = 0.2;
const REST_LEAST_MG = 8;
/** How near a later step must come to what the vehicle's leaving would do. */
const HOME_SHARE = 0.5;
const EXACT_SHARE = 0.25;
const MS_PER_S = 1000;

/** Keeps in mind what a departure that does not quite fit would have left, were it none. */
export function noteParting(
	n: Node,
	step: Pick<Step, 'j' | 'atMs'>,
	stood: Arrival | null,
	baseline: Triple
): void {
	const { slow, fast } = n;
	slow.parted = null;
	slow.suspect = null;
	if (stood === null) return;
	const restMg = Math.min(sumSize(step.j, stood.step), sumSize(step.j, stood.first));
	const leftMg = apart(fast.level, baseline);
	if (restMg <= Math.max(REST_LEAST_MG, REST_SHARE * size3(stood.step)) && leftMg < offMg(n))
		return;
	const { level } = fast;
	slow.parted = {
		atMs: step.atMs,
		j: floats(step.j),
		arrival: { step: floats(stood.step), first: floats(stood.first), atMs: stood.atMs },
		back: floats([baseline[0] - level[0], baseline[1] - level[1], baseline[2] - level[2]]),
		entries: slow.entries
	};
	touch(n);
}

/**
 * A departure that did not quite fit (a small vehicle, with the neighbour or the lane moving beside it) is taken
 * back when the next step shows that the vehicle had stayed: it brings the field home, undoes the arrival
 * better, or takes that movement back with the lane. True when it did.
 */
export function takeBack(
	g: Group,
	n: Node,
	step: Step,
	overlapping: readonly Overlap[],
	atMs: number
): boolean {
	const { parted, state, entries } = n.slow;
	if (parted === null) return false;
	if (state !== 'vacant' || entries !== parted.entries) {
		n.slow.parted = null;
		touch(n);
		return false;
	}
	if (step.gapS > 0 || size3(step.j) < n.params.stepRatio * onMg(n)) return false;
	if (leavesNow(n, step, parted)) {
		stayOn(g, n, parted, atMs);
		depart(g, n, step, overlapping, atMs);
		n.slow.parted = null;
		return true;
	}
	if (!undoesParting(n, step, parted)) return false;
	stayOn(g, n, parted, atMs);
	step.became = 'nothing';
	return true;
}

/** The step brings the field to where it was before the vehicle came, or undoes its arrival better than the last. */
function leavesNow(n: Node, step: Step, { back, arrival, j }: Parted): boolean {
	const { level, baseline } = n.fast;
	const over: Triple = [level[0] - baseline[0], level[1] - baseline[1], level[2] - baseline[2]];
	const backMg = size3(back);
	const fromHomeMg = Math.hypot(over[0] - back[0], over[1] - back[1], over[2] - back[2]);
	const home = backMg >= offMg(n) && fromHomeMg <= Math.min(n.params.returnMg, HOME_SHARE * backMg);
	const restMg = sumSize(step.j, arrival.step);
	const exact = restMg <= EXACT_SHARE * size3(arrival.step);
	return home || (exact && restMg < HOME_SHARE * sumSize(j, arrival.step));
}

/** What moved the field then has moved on: the vehicle's level is back, within the time of a queue. */
function undoesParting(n: Node, step: Step, { j, atMs }: Parted): boolean {
	const { queueMaxS, queueFlatOnRatio } = n.params;
	if (step.atMs - atMs > queueMaxS * MS_PER_S) return false;
	// More than that does not come from the lane.
	if (size3(j) >= queueFlatOnRatio * onMg(n)) return false;
	return sumSize(step.j, j) <= EXACT_SHARE * size3(j);
}

const WHY = 'the vehicle had not left: a later step shows it';

/** Takes the departure back: the vehicle stands on the baseline of before. */
function stayOn(g: Group, n: Node, parted: Parted, atMs: number): void {
	const { slow, fast } = n;
	voidEntry(g, n, 'departure', parted.atMs, atMs, WHY);
	slow.state = 'occupied';
	slow.sinceMs = parted.arrival.atMs;
	slow.confidence = carriedConfidence(n);
	slow.evidence = evidence([WHY]);
	slow.arrival = parted.arrival;
	slow.parted = null;
	slow.aisle = null;
	fast.rebase = 0;
	fast.stayMg = Math.fround(size3(parted.arrival.step));
	shift3(fast.baseline, parted.back);
	touch(n);
}
