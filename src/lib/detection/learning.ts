import { median } from 'simple-statistics';
import { robustSigma } from '$lib/numeric/mad';
import { ask, enter, lookBy } from './entries';
import { disturbanceWords, evidence } from './evidence';
import { capOf } from './confidence';
import { touch, type Group, type Node, type Triple } from './state';
import { onMg } from './thresholds';
import { apart, axisApart, set3 } from './vec';

/** The window holds this many readings at most; older ones fall out. */
const WINDOW = 64;
/** Readings of a burst would fill the window within seconds. */
const APART_MS = 1900;
/** The last readings must lie this near the median, else something has just driven up. */
const LAST_AGREE = 3;
const MS_PER_S = 1000;

const axis = (window: readonly number[], i: number): number[] =>
	window.filter((_, k) => k % 3 === i);

/** σ from successive differences: slow drift within the window does not count as noise. */
function noiseOf(values: number[]): number {
	const differences = values.slice(1).map((v, i) => Math.abs(v - (values[i] ?? v)));
	return median(differences);
}

/** Takes a reading into the learning window; learns when it is long, still and quiet enough. */
export function learn(g: Group, n: Node, atMs: number): void {
	const { slow, fast, params } = n;
	if (atMs - (slow.windowAtMs.at(-1) ?? 0) < APART_MS) return;
	slow.window.push(fast.last[0], fast.last[1], fast.last[2]);
	slow.windowAtMs.push(atMs);
	if (slow.windowAtMs.length > WINDOW) {
		slow.window.splice(0, 3);
		slow.windowAtMs.shift();
	}
	touch(n);
	const count = slow.windowAtMs.length;
	const spanMs = atMs - (slow.windowAtMs[0] ?? atMs);
	if (count < params.learnReadings || spanMs < params.learnS * MS_PER_S) return;
	const axes = [0, 1, 2].map((i) => axis(slow.window, i));
	const centre = axes.map(median) as Triple;
	const sigmas = axes.map(robustSigma);
	const sigma = Math.max(...sigmas);
	if (sigma > params.learnSigmaMg || !endsAt(slow.window, centre, params.learnSigmaMg)) return;
	fast.noise[0] = noiseOf(axes[0] ?? []);
	fast.noise[1] = noiseOf(axes[1] ?? []);
	fast.noise[2] = noiseOf(axes[2] ?? []);
	finish(g, n, centre, sigma, count, atMs);
}

function endsAt(window: readonly number[], median: Triple, sigmaMg: number): boolean {
	const limit = LAST_AGREE * sigmaMg;
	for (let k = window.length - 3 * LAST_AGREE; k < window.length; k += 3) {
		const reading = [window[k] ?? NaN, window[k + 1] ?? NaN, window[k + 2] ?? NaN] as Triple;
		if (!(axisApart(reading, median) <= limit)) return false;
	}
	return true;
}

function finish(
	g: Group,
	n: Node,
	median: Triple,
	sigma: number,
	count: number,
	atMs: number
): void {
	const { slow, fast } = n;
	slow.candidate = {
		learnedAtMs: atMs,
		fieldMg: median,
		sigmaMg: sigma,
		tempC: Number.isNaN(fast.tempC) ? null : fast.tempC,
		offsetMg: slow.offset,
		readings: count
	};
	slow.learning = false;
	slow.window = [];
	slow.windowAtMs = [];
	set3(fast.level, median);
	set3(fast.baseline, median);
	fast.baselineTempC = fast.tempC;
	touch(n);
	g.out.push({ kind: 'learned', nodeId: n.id, reference: slow.candidate });
	ask(g, n, 'report_habit', 'learned', atMs);
	if (slow.preCommissioned) accept(g, n, 'rule', atMs);
}

/** Takes the learned field into use; by rule it is provisional (method 3). */
export function accept(g: Group, n: Node, by: string, atMs: number): string | null {
	const { slow, fast } = n;
	if (slow.candidate === null) return 'no quiet field learned yet';
	const provisional = by === 'rule';
	if (!provisional && apart(fast.level, slow.candidate.fieldMg) > onMg(n)) {
		return 'the field has moved since it was learned: learn again';
	}
	slow.reference = { ...slow.candidate, acceptedAtMs: atMs, provisional };
	slow.returns = 0;
	slow.strange = null;
	slow.doubt = null;
	g.out.push({ kind: 'accepted', nodeId: n.id, atMs, provisional, by });
	set3(fast.baseline, provisional ? slow.reference.fieldMg : fast.level);
	fast.baselineTempC = fast.tempC;
	slow.arrival = null;
	// While learning, housekeeping had nothing to look for (nextCheckMs): it begins now.
	lookBy(n, atMs);
	enter(
		g,
		n,
		{
			type: 'known',
			state: 'vacant',
			atMs,
			uncertaintyS: 0,
			confidence: Math.min(0.97, capOf(n)),
			evidence: evidence([
				disturbanceWords(apart(fast.level, fast.baseline), onMg(n)),
				provisional
					? 'quiet field accepted by rule'
					: 'seen empty when its quiet field was accepted'
			])
		},
		atMs
	);
	return null;
}

/** Starts learning afresh: a node placed or moved. */
export function startLearning(g: Group, n: Node, preCommissioned: boolean, atMs: number): void {
	const { slow, fast } = n;
	if (slow.state !== 'unknown') {
		enter(
			g,
			n,
			{
				type: 'unknown',
				state: 'unknown',
				atMs,
				uncertaintyS: 0,
				confidence: 0,
				evidence: evidence(['the node was placed anew and finds its quiet field'])
			},
			atMs
		);
	}
	slow.unknownWhy = 'new';
	slow.learning = true;
	slow.preCommissioned = preCommissioned;
	slow.candidate = null;
	slow.reference = null;
	slow.arrival = null;
	slow.pending = null;
	slow.aisle = null;
	slow.echoes = [];
	slow.steps = [];
	slow.parted = null;
	slow.suspect = null;
	slow.hours = [];
	slow.slope = null;
	slow.window = [];
	slow.windowAtMs = [];
	slow.strange = null;
	slow.doubt = null;
	fast.open = 0;
	fast.boxN = 0;
	fast.levelN = 0;
	touch(n);
	ask(g, n, 'report_fast', 'learning', atMs);
	if (slow.offset === null) ask(g, n, 'pair', 'learning', atMs);
}
