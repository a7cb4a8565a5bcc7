import { touch, triple, type Node, type Step, type Triple } from './state';
import { sigmaMg, stillMg } from './thresholds';
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
/** The mirrored field must be this much nearer than the field as it is. */
const NEARER = 0.25;
/** An offset that has moved since its pair puts the mirror off by twice that: a step this much larger still shows it. */
const FAR_NEARER = 0.1;
/** Seen to turn at once, and back to within noise, a smaller axis shows its sign too. */
const SURE_AXIS_MG = 8;
const SURE_SIGMA = 2.5;
const SURE_LEAST_MG = 1.5;

interface Mirror {
	signs: Triple;
	offMg: number;
}

function invertedAxes(n: Node, step: Step): Triple | null {
	const { fast, slow, params } = n;
	if (slow.offset === null || slow.reference === null) return null;
	if (step.burst && step.toMs - step.newMs > AT_ONCE_MS) return null;
	const { baseline, level } = fast;
	const old: Triple = [level[0] - step.j[0], level[1] - step.j[1], level[2] - step.j[2]];
	const known = step.gapS > 0 ? [old, triple(baseline)] : [old];
	const asItIs = Math.min(apart(level, old), apart(level, baseline));
	const near = Math.max(2 * stillMg(n), params.invertedRatio * size3(old));
	const loose = bestMirror(level, old, known, params.invertedAxisMg);
	const limit = Math.max(Math.min(near, NEARER * asItIs), FAR_NEARER * asItIs);
	const alone = loose !== null && (!step.burst || othersStill(n, step, loose.signs));
	if (alone && loose.offMg <= limit) return loose.signs;
	if (!step.burst) return null;
	const sure = bestMirror(level, old, [old], SURE_AXIS_MG);
	const exact = Math.max(SURE_LEAST_MG, SURE_SIGMA * sigmaMg(n));
	return sure !== null && sure.offMg <= Math.min(exact, NEARER * asItIs) ? sure.signs : null;
}

/** Each axis is a bridge of its own: one that turns over leaves the others where they were, as a vehicle does not. */
const othersStill = (n: Node, { j }: Step, signs: Triple): boolean =>
	([0, 1, 2] as const).every((i) => signs[i] < 0 || Math.abs(j[i]) <= 2 * stillMg(n));

/** The set of axes, one of which carries enough, whose change of sign comes nearest to what is known. */
function bestMirror(
	level: Axes,
	old: Triple,
	known: readonly Triple[],
	axisMg: number
): Mirror | null {
	let best: Mirror | null = null;
	for (const signs of AXIS_SETS) {
		const carries = ([0, 1, 2] as const).some((i) => signs[i] < 0 && Math.abs(old[i]) > axisMg);
		if (!carries) continue;
		const back = mirrored(level, signs);
		const offMg = Math.min(...known.map((k) => apart(back, k)));
		if (best === null || offMg < best.offMg) best = { signs, offMg };
	}
	return best;
}
