import { arrivalConfidence, capOf, carriedConfidence, departureConfidence } from './confidence';
import { clearDoubt, doubtIt, enter, remember } from './entries';
import { disturbanceWords, evidence, neighbourWords, spanWords, stepWords } from './evidence';
import { atReference, fromReferenceMg, unexplainedByTempMg } from './reference';
import { summed, touch, triple, type Group, type Node, type Step, type Triple } from './state';
import { undoneByStep } from './settlement';
import { addStay } from './stays';
import { offMg, onMg, releaseMg } from './thresholds';
import { apart, set3, size3, sumSize } from './vec';

export interface Overlap {
	node: Node;
	step: Step;
}

/** Still readings after a departure that make up the new baseline (method 3). */
const REBASE_READINGS = 4;
const MS_PER_S = 1000;

/** Would this step at a vacant bay be a vehicle's (step rule, gaps)? */
export function isArrival(n: Node, step: Step): boolean {
	const { level, baseline } = n.fast;
	const d = apart(level, baseline);
	const on = onMg(n);
	if (d < on || comesHome(n, step)) return false;
	if (step.gapS > 0) {
		return d >= on + unexplainedByTempMg(n, n.fast.baselineTempC) && size3(step.j) >= on;
	}
	return size3(step.j) >= n.params.stepRatio * on;
}

/**
 * A level at the accepted reference is vacant whatever the running baseline says (method 3): when it is right
 * on it, or when the level that it left was far away.
 */
function comesHome(n: Node, step: Step): boolean {
	const { level } = n.fast;
	const nowMg = fromReferenceMg(n, level);
	if (nowMg <= n.params.returnMg) return true;
	if (nowMg > offMg(n)) return false;
	const left = triple(level).map((v, i) => v - step.j[i as 0]) as Triple;
	return fromReferenceMg(n, left) > 2 * onMg(n);
}

/** A departure takes back most of what the arrival brought; less is the vehicle next to it, or drift. */
const MOST_OF_IT = 0.6;
const HALF_OF_IT = 0.5;

/** What is left beyond this share of the first step is a vehicle that came on top of it. */
const MOST_GROWTH = 1.5;

/** Would this step at an occupied bay be the vehicle's leaving (step ledger, release)? */
export function isDeparture(n: Node, step: Step, echoMg = 0): boolean {
	const { arrival } = n.slow;
	const size = size3(step.j);
	if (size < n.params.stepRatio * onMg(n)) return false;
	if (arrival === null) return apart(n.fast.level, n.fast.baseline) < releaseMg(n);
	if (seenNotFelt(n)) return size >= onMg(n) && !leftReference(n, step);
	const stood = Math.min(size3(arrival.first), size3(arrival.step));
	if (step.gapS === 0 && size < MOST_OF_IT * Math.min(stood, n.fast.stayMg)) return false;
	if (undoes(n, step, arrival.step, echoMg)) return true;
	const grown = sumSize(step.j, arrival.step) > MOST_GROWTH * size3(arrival.first);
	if (!grown && undoes(n, step, arrival.first, echoMg)) return true;
	return released(n, step) || atReference(n, n.fast.level);
}

/** The level is under the release threshold, and this step is what brought it there. */
function released(n: Node, step: Step): boolean {
	const { level, baseline } = n.fast;
	const d = apart(level, baseline);
	if (d >= releaseMg(n)) return false;
	const left = triple(level).map((v, i) => v - step.j[i as 0]) as Triple;
	return step.gapS > 0 || d <= MOST_LEFT * apart(left, baseline);
}

/** A departure that is not known by its arrival takes at least this much of the disturbance with it. */
const MOST_LEFT = 0.6;

/** A person saw the bay taken while its field stood at the baseline, and nothing was told since. */
function seenNotFelt(n: Node): boolean {
	const { settle, entries, arrival } = n.slow;
	if (settle?.as !== 'seen_occupied' || settle.entries !== entries || arrival === null)
		return false;
	return size3(arrival.step) < offMg(n);
}

/**
 * Was the field at a reference that a person saw empty? Then the vehicle stands where the node does not feel it, and
 * the step is not its own; else the baseline had taken it in, and the step is its leaving.
 */
function leftReference(n: Node, step: Step): boolean {
	if (n.slow.reference?.provisional !== false) return false;
	const left = triple(n.fast.level).map((v, i) => v - step.j[i as 0]) as Triple;
	return atReference(n, left);
}

/** Step ledger: does this step take that one back? */
function undoes(n: Node, step: Step, came: Triple, echoMg: number): boolean {
	const size = size3(came);
	const near = Math.min(offMg(n), HALF_OF_IT * size);
	return (
		sumSize(step.j, came) <= Math.max(near, n.params.undoRatio * size) + Math.min(echoMg, size / 4)
	);
}

/** Judges a settled step by the node's own evidence. */
export function judge(
	g: Group,
	n: Node,
	step: Step,
	overlapping: readonly Overlap[],
	atMs: number
): void {
	if (n.slow.unknownWhy === 'silent' || n.slow.unknownWhy === 'clipped') {
		believeAgain(g, n, step, step.toMs, atMs);
	} else if (n.slow.state === 'vacant') {
		if (undoneByStep(g, n, step, atMs)) depart(g, n, step, overlapping, atMs);
		else if (isArrival(n, step)) arrive(g, n, step, overlapping, atMs);
		else stayVacant(n, step);
	} else if (n.slow.state === 'occupied') {
		if (isDeparture(n, step, echoOf(n, overlapping))) depart(g, n, step, overlapping, atMs);
		else stayOccupied(n, step);
	}
}

/** What a neighbour's step at the same time may have left here on top of it, mG. */
const echoOf = (n: Node, overlapping: readonly Overlap[]): number =>
	n.params.echoSureRatio * Math.max(0, ...overlapping.map((o) => size3(o.step.j)));

export function arrive(
	g: Group,
	n: Node,
	step: Step,
	overlapping: readonly Overlap[],
	decidedAtMs: number,
	more: string[] = []
): void {
	const { fast, slow } = n;
	const d = apart(fast.level, fast.baseline);
	step.became = 'arrival';
	step.before = remember(n);
	slow.aisle = null;
	startStay(n, step.atMs);
	const words = [
		disturbanceWords(d, onMg(n)),
		stepWords(step, 'rose'),
		...more,
		...neighbourWords(n, overlapping)
	];
	enter(
		g,
		n,
		{
			type: 'arrival',
			state: 'occupied',
			atMs: step.atMs,
			uncertaintyS: step.uncertaintyS,
			confidence: arrivalConfidence(n, step, d),
			evidence: evidence(words, againstArrival(n))
		},
		decidedAtMs
	);
}

const againstArrival = (n: Node): string[] =>
	n.slow.reference?.provisional === true ? ['the reference is not yet proved'] : [];

/** Takes the present level as a vehicle standing on the baseline. */
export function startStay(n: Node, atMs: number): void {
	const { fast, slow } = n;
	const over = {
		0: fast.level[0] - fast.baseline[0],
		1: fast.level[1] - fast.baseline[1],
		2: fast.level[2] - fast.baseline[2]
	};
	slow.arrival = { step: triple(over), first: triple(over), atMs };
	slow.longCheckMs = 0;
	slow.longAsked = false;
	slow.longStay = false;
	slow.stayNo++;
	fast.stayMg = Math.fround(size3(over));
	fast.rebase = 0;
	touch(n);
}

export function depart(
	g: Group,
	n: Node,
	step: Step,
	overlapping: readonly Overlap[],
	decidedAtMs: number
): void {
	const { fast } = n;
	const d = apart(fast.level, fast.baseline);
	const release = releaseMg(n);
	step.became = 'departure';
	step.before = remember(n);
	addStay(n, step.atMs);
	takeVacant(n);
	enter(
		g,
		n,
		{
			type: 'departure',
			state: 'vacant',
			atMs: step.atMs,
			uncertaintyS: step.uncertaintyS,
			confidence: departureConfidence(n, step, d / release),
			evidence: evidence(
				[disturbanceWords(d, release), stepWords(step, 'fell'), ...neighbourWords(n, overlapping)],
				againstArrival(n)
			)
		},
		decidedAtMs
	);
}

/** The present level is the quiet field of an empty bay. */
export function takeVacant(n: Node): void {
	const { fast, slow } = n;
	set3(fast.baseline, fast.level);
	fast.baselineTempC = fast.tempC;
	fast.rebase = REBASE_READINGS - 1;
	fast.stayMg = 0;
	slow.arrival = null;
	slow.cap = 1;
	slow.longStay = false;
	clearDoubt(n);
	countReturn(n);
	touch(n);
}

/** A provisional reference is proved by the field coming back to it; that also clears strange levels. */
function countReturn(n: Node): void {
	const { slow } = n;
	if (fromReferenceMg(n, n.fast.level) > n.params.returnMg) return;
	slow.strange = null;
	if (slow.reference?.provisional !== true) return;
	slow.returns++;
	if (slow.returns >= n.params.returnsToProve)
		slow.reference = { ...slow.reference, provisional: false };
}

/** A level that is no vehicle: back at the reference, or drift over a silence. */
function stayVacant(n: Node, step: Step): void {
	const { fast } = n;
	const d = apart(fast.level, fast.baseline);
	step.became = 'nothing';
	if (d >= onMg(n) && comesHome(n, step)) takeVacant(n);
	else if (step.gapS > 0 && d >= offMg(n)) {
		doubtIt(n, 'field moved during a gap', step.toMs);
		set3(fast.baseline, fast.level);
	}
}

/** The vehicle moved, or another took its place unseen. */
function stayOccupied(n: Node, step: Step): void {
	step.became = 'nothing';
	const { arrival } = n.slow;
	if (arrival === null || size3(step.j) < offMg(n)) return;
	n.slow.arrival = { ...arrival, step: summed(arrival.step, step.j) };
	touch(n);
}

/** State after a silence or an overload, by level (method 4, gaps). */
export function believeAgain(
	g: Group,
	n: Node,
	step: Step | null,
	knownAtMs: number,
	decidedAtMs: number
): void {
	const { fast, slow } = n;
	const was = slow.lastKnown?.state ?? 'vacant';
	const d = apart(fast.level, fast.baseline);
	const allow = unexplainedByTempMg(n, fast.baselineTempC);
	const gone = step !== null && isDeparture(n, step);
	const taken = was === 'occupied' ? !gone : d >= onMg(n) + allow;
	const sinceMs = slow.lastKnown?.atMs ?? knownAtMs;
	if (step !== null) step.before = remember(n);
	if (taken && was !== 'occupied') startStay(n, knownAtMs);
	if (!taken && (was === 'occupied' || step !== null)) takeVacant(n);
	const limit = taken ? onMg(n) : offMg(n);
	enter(
		g,
		n,
		{
			type: 'known',
			state: taken ? 'occupied' : 'vacant',
			atMs: knownAtMs,
			uncertaintyS: 0,
			confidence: Math.min(carriedConfidence(n), capOf(n)),
			evidence: evidence([
				disturbanceWords(d, limit),
				`heard again after ${spanWords((knownAtMs - sinceMs) / MS_PER_S)} not known`
			])
		},
		decidedAtMs
	);
}
