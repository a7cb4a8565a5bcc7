import { touch, triple, type Node, type Step, type Triple } from './state';
import { offMg, stillMg } from './thresholds';
import { apart, set3, size3, type Axes } from './vec';

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
