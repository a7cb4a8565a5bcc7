import { lookBy } from './entries';
import { arrive, isArrival } from './judge';
import { touch, type Group, type Node, type Step } from './state';
import { offMg, onMg } from './thresholds';
import { apart, size3, sumSize } from './vec';

const MS_PER_S = 1000;

/** A like step of another node of the row that came to rest within queueS. */
function likeStep(n: Node, step: Step): { node: Node; step: Step } | null {
	const { queueS, queueFactor } = n.params;
	const size = size3(step.j);
	for (const m of n.mates) {
		const steps = m.slow.pending === null ? m.slow.steps : [...m.slow.steps, m.slow.pending];
		for (const s of steps) {
			const ratio = size3(s.j) / size;
			const alike = ratio <= queueFactor && ratio >= 1 / queueFactor;
			if (alike && s.became !== 'film' && Math.abs(s.toMs - step.toMs) <= queueS * MS_PER_S) {
				return { node: m, step: s };
			}
		}
	}
	return null;
}

/** What drives over a node shows its axles; what passes beside it rises to its level and no higher. */
export const isFlat = (n: Node, step: Step): boolean =>
	step.burst && step.peakMg < n.params.flatRatio * size3(step.j);

/** A peak under this many times the level: no axle came as near as it would in the bay. */
const BESIDE_FLAT = 2;
/** Where the vertical carries less than this share of the Earth's field, its sign tells nothing. */
const UPRIGHT = 0.5;
/** Nearly level is beside, too: what stands over the node adds to the vertical. */
const LEVEL = 0.1;

/**
 * Where no other node of the row is within reach (kerbs), the field's own shape must tell. The Earth's field
 * induces a dipole along itself: over the node it adds to the vertical, beside the node, in the lane, it takes
 * from it, whichever way the street runs.
 */
function standsBeside(n: Node, step: Step): boolean {
	if (n.mates.length > 0 || n.slow.offset === null || !step.burst) return false;
	if (step.peakMg >= BESIDE_FLAT * size3(step.j)) return false;
	const { level, baseline } = n.fast;
	if (Math.abs(baseline[2]) < UPRIGHT * size3(baseline)) return false;
	const added = (level[2] - baseline[2]) * Math.sign(baseline[2]);
	return added < LEVEL * apart(level, baseline);
}

/** A level under this may stand in the aisle, mG. */
export function aisleLimitMg(n: Node, step: Step): number {
	const { queueOnRatio, queueFlatOnRatio } = n.params;
	return onMg(n) * (isFlat(n, step) ? queueFlatOnRatio : queueOnRatio);
}

/** A low level beside a like one of the row may stand in the aisle: the state stays for now. */
export function takeAisle(g: Group, n: Node, step: Step, atMs: number): boolean {
	const { slow, fast, params } = n;
	if (slow.state !== 'vacant') return false;
	const d = apart(fast.level, fast.baseline);
	if (slow.aisle !== null) return followAisle(g, n, step, d, atMs);
	if (step.gapS > 0 || d >= aisleLimitMg(n, step) || !isArrival(n, step)) return false;
	const like = likeStep(n, step);
	if (like === null && !standsBeside(n, step)) return false;
	step.became = 'aisle';
	slow.aisle = {
		step: { ...step, before: null },
		by: like === null ? null : like.node.id,
		byJ: like === null ? step.j : like.step.j,
		deadlineMs: step.toMs + params.queueMaxS * MS_PER_S
	};
	lookBy(n, slow.aisle.deadlineMs);
	touch(n);
	return true;
}

/** A further step while 'aisle': gone, grown into a vehicle, or another of the queue in its place. */
function followAisle(g: Group, n: Node, step: Step, d: number, atMs: number): boolean {
	const { slow } = n;
	const size = size3(step.j);
	if (d >= aisleLimitMg(n, step) && size >= onMg(n)) arrive(g, n, step, [], atMs);
	else {
		step.became = 'nothing';
		if (d < offMg(n)) slow.aisle = null;
		else if (size >= offMg(n)) startAgain(n, step);
	}
	touch(n);
	return true;
}

function startAgain(n: Node, step: Step): void {
	const { aisle } = n.slow;
	if (aisle === null) return;
	const deadlineMs = step.toMs + n.params.queueMaxS * MS_PER_S;
	n.slow.aisle = { ...aisle, step: { ...step, before: null }, deadlineMs };
}

/** The level was left and came back: the next of the queue has taken the place of the one before. */
export function moveUp(n: Node, atMs: number): void {
	const { aisle } = n.slow;
	if (aisle === null) return;
	const { openOldAtMs, openNewAtMs } = n.fast;
	startAgain(n, { ...aisle.step, fromMs: openOldAtMs, newMs: openNewAtMs, toMs: atMs, atMs });
	touch(n);
}

/** Those of a queue leave one by one: what stands this many times queueS after the other has gone is not of it. */
const LEFT_BEHIND = 6;

/** The like step elsewhere in the row is undone: what stood with it in the lane must move on now, or it is parked. */
export function markAisleUndone(n: Node, step: Step): void {
	for (const m of n.mates) {
		const { aisle } = m.slow;
		if (aisle?.by !== n.id) continue;
		const undone = Math.max(offMg(n), n.params.undoRatio * size3(aisle.byJ));
		if (sumSize(step.j, aisle.byJ) > undone) continue;
		const deadlineMs = step.toMs + LEFT_BEHIND * m.params.queueS * MS_PER_S;
		if (deadlineMs >= aisle.deadlineMs) continue;
		m.slow.aisle = { ...aisle, deadlineMs };
		lookBy(m, deadlineMs);
		touch(m);
	}
}

/** What outlasts the queue is parked, since its own time. */
export function endAisle(g: Group, n: Node, atMs: number): void {
	const { aisle, state } = n.slow;
	if (aisle === null || atMs < aisle.deadlineMs) return;
	n.slow.aisle = null;
	touch(n);
	if (state !== 'vacant' || apart(n.fast.level, n.fast.baseline) < onMg(n)) return;
	arrive(g, n, aisle.step, [], atMs, ['stayed when the queue had moved on']);
}
