import { doubtIt } from './entries';
import { isDeparture } from './judge';
import { touch, triple, type Node, type Step, type Triple } from './state';
import { offMg, stillMg } from './thresholds';
import { apart, set3, shift3, size3, type Axes } from './vec';

const AXIS_SETS: readonly Triple[] = [
	[-1, 1, 1],
	[1, -1, 1],
	[1, 1, -1],
	[-1, -1, 1],
	[-1, 1, -1],
	[1, -1, -1],
	[-1, -1, -1]
];

const mirrored = (v: Axes, s: Triple): Triple => [v[0] * s[0], v[1] * s[1], v[2] * s[2]];

/** The step's jump is the film's or the magnet's: the known fields move with it, the state stays. */
function carryFilmStep(n: Node, step: Step): void {
	step.became = 'film';
	shift3(n.fast.baseline, step.j);
	touch(n);
}

/** A strong field leaves at most this much of an axis. */
const FILM_KEEPS = 0.95;

/** Could a weakened or turned film alone have made this step? A vehicle makes some axis grow. */
function filmCould(n: Node, step: Step): boolean {
	if (n.slow.offset === null) return true;
	const { level } = n.fast;
	return ([0, 1, 2] as const).every(
		(i) => Math.abs(level[i]) <= FILM_KEEPS * Math.abs(level[i] - step.j[i]) + stillMg(n)
	);
}

/**
 * A step with a clipped row, or one past what the film bears, is a magnet's (method 4), unless it is what
 * only a vehicle can do: an axle close over the node may pass that limit too.
 */
export function takeMagnet(n: Node, step: Step): boolean {
	if (!step.clipped || !filmCould(n, step)) return false;
	if (n.slow.state === 'occupied' && isDeparture(n, step)) return false;
	const { atMs, uncertaintyS, settledMs, j } = step;
	carryFilmStep(n, step);
	// Undone by itself, without a pulse, it was a vehicle after all (neighbours.ts, leaveAlone).
	n.slow.echoes.push({ by: n.id, j, byJ: j, atMs, uncertaintyS, settledMs, checkAfterMs: 0 });
	doubtIt(n, 'magnet', step.atMs);
	n.slow.refreshWhy = 'a strong field met the film';
	return true;
}

/**
 * Inverted film, axis by axis (method 4): the set of axes whose change of sign brings the level back to
 * what is known of this bay. Needs an offset: without one a sign says nothing.
 */
export function takeInversion(n: Node, step: Step): boolean {
	const signs = invertedAxes(n, step);
	if (signs === null) return false;
	const { fast, slow } = n;
	slow.signs = mirrored(slow.signs, signs);
	const level = mirrored(fast.level, signs);
	set3(fast.level, level);
	set3(fast.last, mirrored(fast.last, signs));
	fast.boxN = 0;
	step.became = 'film';
	slow.refreshWhy = slow.signs.some((s) => s < 0) ? 'the film has flipped' : slow.refreshWhy;
	touch(n);
	return true;
}

/** A film turns over at once; a vehicle is seen on its way. */
const AT_ONCE_MS = 1200;

function invertedAxes(n: Node, step: Step): Triple | null {
	const { fast, slow, params } = n;
	if (slow.offset === null || slow.reference === null) return null;
	if (step.burst && step.toMs - step.newMs > AT_ONCE_MS) return null;
	const { baseline, level } = fast;
	const old: Triple = [level[0] - step.j[0], level[1] - step.j[1], level[2] - step.j[2]];
	const near = Math.max(2 * stillMg(n), params.invertedRatio * size3(old));
	const known = step.gapS > 0 ? [old, triple(baseline)] : [old];
	const far = 2 * Math.max(near, offMg(n));
	if (apart(level, old) <= far || apart(level, baseline) <= far) return null;
	let best: Triple | null = null;
	let bestMg = near;
	for (const signs of AXIS_SETS) {
		const carries = ([0, 1, 2] as const).some(
			(i) => signs[i] < 0 && Math.abs(old[i]) > params.invertedAxisMg
		);
		if (!carries) continue;
		const back = mirrored(level, signs);
		const off = Math.min(...known.map((k) => apart(back, k)));
		if (off <= bestMg) [best, bestMg] = [signs, off];
	}
	return best;
}
