import { aisleConfidence } from './confidence';
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

/** A low level beside a like one of the row may stand in the aisle: the state stays for now. */
export function takeAisle(g: Group, n: Node, step: Step, atMs: number): boolean {
	const { slow, fast, params } = n;
	if (slow.state !== 'vacant') return false;
	const d = apart(fast.level, fast.baseline);
	if (slow.aisle !== null) return followAisle(g, n, step, d, atMs);
	if (step.gapS > 0 || d >= params.queueOnRatio * onMg(n) || !isArrival(n, step)) return false;
	const like = likeStep(n, step);
	if (like === null) return false;
	step.became = 'aisle';
	slow.aisle = {
		step: { ...step, before: null },
		by: like.node.id,
		byJ: like.step.j,
		deadlineMs: step.toMs + params.queueMaxS * MS_PER_S
	};
	slow.confidence = Math.min(slow.confidence, aisleConfidence(n));
	lookBy(n, slow.aisle.deadlineMs);
	touch(n);
	return true;
}

/** A further step while 'aisle': gone, grown into a vehicle, or still waiting. */
function followAisle(g: Group, n: Node, step: Step, d: number, atMs: number): boolean {
	const { slow, params } = n;
	if (d < offMg(n)) {
		slow.aisle = null;
		step.became = 'nothing';
	} else if (d >= params.queueOnRatio * onMg(n)) arrive(g, n, step, [], atMs);
	else step.became = 'nothing';
	touch(n);
	return true;
}

/** When the other of the queue moves on, who stays is parked: looked at after another queueS. */
export function aisleEnds(n: Node, step: Step): void {
	for (const m of n.mates) {
		const { aisle } = m.slow;
		if (aisle?.by !== n.id) continue;
		const undone = Math.max(offMg(n), n.params.echoUndoRatio * size3(aisle.byJ));
		if (sumSize(step.j, aisle.byJ) > undone) continue;
		aisle.deadlineMs = Math.min(aisle.deadlineMs, step.toMs + n.params.queueS * MS_PER_S);
		lookBy(m, aisle.deadlineMs);
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
