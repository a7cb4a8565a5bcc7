import { carriedConfidence } from './confidence';
import { voidEntry } from './entries';
import { evidence } from './evidence';
import { filmCould } from './magnet';
import { touch, type Arrival, type Group, type Node, type Step } from './state';
import { offMg, onMg } from './thresholds';
import { size3, sumSize, type Axes } from './vec';

/** A pulse gives back what the film had lost within this share of it. */
const HEALED_SHARE = 0.25;
const WHY = 'the film made this step, for a pulse took it back';

/** Keeps a step in mind that a film could have made alone: a magnet that nobody saw leaves no other trace. */
export function noteSuspect(
	n: Node,
	step: Step,
	stood: Arrival | null,
	sinceMs: number | null
): void {
	const { slow } = n;
	if (
		slow.suspect !== null &&
		sumSize(step.j, slow.suspect.j) <= n.params.undoRatio * size3(step.j)
	) {
		slow.suspect = null;
		touch(n);
	}
	const { became } = step;
	if (became !== 'nothing' && became !== 'arrival') return;
	const size = size3(step.j);
	if (slow.offset === null || size < onMg(n) || !filmCould(n, step)) return;
	const holds = slow.suspect?.entries === slow.entries;
	if (slow.suspect !== null && holds && size < size3(slow.suspect.j)) return;
	if (became === 'nothing' && slow.state !== 'occupied') return;
	slow.suspect = {
		j: step.j,
		atMs: step.atMs,
		became,
		arrival: stood,
		sinceMs,
		entries: slow.entries
	};
	touch(n);
}

/**
 * No film heals by itself: a pulse that takes a step back shows that the film had made it. What was told of that
 * step is voided and the bay stands as before it. True when it was so; the level is then as healed.
 */
export function takeHealed(g: Group, n: Node, healedBy: Axes, atMs: number): boolean {
	const { slow, fast } = n;
	const { suspect } = slow;
	if (suspect === null) return false;
	slow.suspect = null;
	touch(n);
	const size = size3(suspect.j);
	const same = Math.max(offMg(n), HEALED_SHARE * size);
	if (size3(healedBy) < onMg(n) || sumSize(healedBy, suspect.j) > same) return false;
	if (slow.entries !== suspect.entries || slow.state === 'unknown') return false;
	if (suspect.became === 'arrival') {
		voidEntry(g, n, 'arrival', suspect.atMs, atMs, WHY);
		slow.state = 'vacant';
		slow.sinceMs = suspect.sinceMs;
		slow.confidence = carriedConfidence(n);
		slow.evidence = evidence([WHY]);
	}
	slow.arrival = suspect.arrival;
	fast.stayMg = Math.fround(size3(suspect.arrival?.step ?? [0, 0, 0]));
	return true;
}
