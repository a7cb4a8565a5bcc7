import { clearDoubt, doubtIt } from './entries';
import { takeHealed } from './film-suspect';
import { forgetFilm } from './magnet';
import { resolve } from './neighbours';
import { atReference } from './reference';
import { touch, triple, type Group, type Node, type Triple } from './state';
import { onMg, sigmaMg, stillMg } from './thresholds';
import type { Vec3 } from '$lib/magnetics/vector';
import type { PulseItem } from './types';
import { axisApart, set3, shift3, size3, type Axes } from './vec';

const MS_PER_S = 1000;
/** `after` repeats `set` within 4 sigma of a difference (method 2), never asked finer than this. */
const REPEAT_SIGMA = 4 * Math.SQRT2;
const REPEAT_LEAST_MG = 4;
const CAP_AFTER_SCALING = 0.8;
/** A film does not gain or lose more than this at once without flipping. */
const LEAST_RATIO = 0.4;
const MOST_RATIO = 2.5;

const midOf = (a: Vec3, b: Vec3): Triple => [
	(a[0] + b[0]) / 2,
	(a[1] + b[1]) / 2,
	(a[2] + b[2]) / 2
];

/** Why a pair is not believed; null when it is (method 2). */
function refusal(n: Node, pulse: PulseItem): string | null {
	const { fast } = n;
	if (fast.open === 1) return 'the field moved around it';
	const repeat = Math.max(REPEAT_LEAST_MG, REPEAT_SIGMA * sigmaMg(n));
	if (
		pulse.afterMg !== null &&
		pulse.setMg !== null &&
		axisApart(pulse.afterMg, pulse.setMg) > repeat
	) {
		return 'the reading after it does not repeat the set reading';
	}
	if (pulse.before === null || fast.levelN === 0) return null;
	const recent = pulse.atMs - fast.lastAtMs <= n.member.periodS * MS_PER_S;
	const before = fieldOf(n, pulse.before.rawMg, polarityBefore(n, pulse), n.slow.offset);
	return recent && axisApart(before, fast.level) > 2 * stillMg(n)
		? 'the field moved around it'
		: null;
}

/** Raw field to the field at the node: B = s p (r - O). */
function fieldOf(n: Node, rawMg: Vec3, p: number, offset: Axes | null): Triple {
	const o = offset ?? [0, 0, 0];
	const s = n.slow.signs;
	return [s[0] * p * (rawMg[0] - o[0]), s[1] * p * (rawMg[1] - o[1]), s[2] * p * (rawMg[2] - o[2])];
}

/** A pulse heals the film: offset, baseline and arrival are carried over it, the state is held. */
export function takePulse(g: Group, n: Node, pulse: PulseItem): void {
	const { fast, slow } = n;
	const isPair = pulse.setMg !== null && pulse.resetMg !== null;
	const why = isPair ? refusal(n, pulse) : fast.open === 1 ? 'the field moved around it' : null;
	if (slow.pending !== null) resolve(g, n, pulse.atMs, 'forced');
	touch(n);
	slow.lastPulseMs = pulse.atMs;
	fast.quietUntilMs = pulse.atMs + n.params.pulseQuietS * MS_PER_S;
	if (fast.checkAtMs === 0) fast.checkAtMs = pulse.atMs;
	if (why === null && pulse.setMg !== null && pulse.resetMg !== null) {
		takeOffset(n, pulse, midOf(pulse.setMg, pulse.resetMg));
	}
	slow.parted = null;
	// Its own before and after tell what it did, also while the field moves.
	const told = pulse.before !== null && (pulse.afterMg ?? pulse.setMg) !== null;
	if (fast.levelN > 0 && (fast.open === 0 || told)) carryOver(g, n, pulse);
	forgetFilm(n);
	slow.refreshWhy = null;
	if (slow.doubt?.reason === 'magnet') clearDoubt(n);
	g.out.push({
		kind: 'pulse_judged',
		nodeId: n.id,
		boot: pulse.boot,
		seq: pulse.seq,
		accepted: why === null,
		why
	});
}

/** The polarity in which levels were read until this pulse. */
const polarityBefore = (n: Node, pulse: PulseItem): number =>
	pulse.before === null || pulse.before.polarity === 0 ? n.fast.polarity : pulse.before.polarity;

/** A better offset never looks like a vehicle: b' = b - (O' - O), and so with all that is kept (method 2). */
function takeOffset(n: Node, pulse: PulseItem, offset: Triple): void {
	const { fast, slow } = n;
	const was = slow.offset ?? [0, 0, 0];
	const frame = polarityBefore(n, pulse);
	const by = [0, 1, 2].map(
		(i) => frame * slow.signs[i as 0] * (was[i as 0] - offset[i as 0])
	) as Triple;
	shift3(fast.baseline, by);
	shift3(fast.level, by);
	shift3(fast.last, by);
	fast.boxN = 0;
	slow.hours = [];
	slow.window = slow.window.map((v, k) => v + by[(k % 3) as 0]);
	if (slow.candidate !== null && slow.reference === null) {
		const f = slow.candidate.fieldMg;
		slow.candidate = {
			...slow.candidate,
			fieldMg: [f[0] + by[0], f[1] + by[1], f[2] + by[2]],
			offsetMg: offset
		};
	}
	slow.offset = offset;
}

/** Re-anchoring over the pulse (method 2): by before and after, else by the rows around it. */
function carryOver(g: Group, n: Node, pulse: PulseItem): void {
	const { fast, slow } = n;
	const after = pulse.afterMg ?? pulse.setMg;
	fast.boxN = 0;
	if (pulse.before === null || after === null) {
		fast.reanchor = slow.reference === null ? 0 : 1;
		return;
	}
	const before = fieldOf(n, pulse.before.rawMg, polarityBefore(n, pulse), slow.offset);
	forgetFilm(n);
	const healed = fieldOf(n, after, pulse.polarityAfter, slow.offset);
	const by: Triple = [healed[0] - before[0], healed[1] - before[1], healed[2] - before[2]];
	const occupied = slow.state === 'occupied' || slow.lastKnown?.state === 'occupied';
	if (takeHealed(g, n, by, pulse.atMs)) shift3(fast.level, by);
	else if (occupied && slow.arrival !== null && slow.offset !== null)
		scaleUnderVehicle(n, before, healed);
	else {
		shift3(fast.baseline, by);
		shift3(fast.level, by);
	}
	if (fast.open === 0) set3(fast.last, fast.level);
	else shift3(fast.last, by);
}

/** Baseline, level and arrival step by B_after / B_before, per axis that carries enough to show it. */
function scaleUnderVehicle(n: Node, before: Triple, healed: Triple): void {
	const { fast, slow, params } = n;
	const step = triple(slow.arrival?.step ?? [0, 0, 0]);
	for (const i of [0, 1, 2] as const) {
		const ratio = healed[i] / before[i];
		const shows = Math.abs(before[i]) >= params.rescaleAxisMg;
		if (shows && ratio > LEAST_RATIO && ratio < MOST_RATIO) {
			fast.baseline[i] *= ratio;
			fast.level[i] *= ratio;
			step[i] *= ratio;
		} else {
			fast.baseline[i] += healed[i] - before[i];
			fast.level[i] += healed[i] - before[i];
		}
	}
	if (slow.arrival !== null) slow.arrival = { ...slow.arrival, step };
	fast.stayMg = Math.fround(size3(step));
	if (axisApart(before, healed) > stillMg(n)) slow.cap = CAP_AFTER_SCALING;
}

/** Without before and after: the first still level after the pulse stands for the last one before it. */
export function settleAfterPulse(g: Group, n: Node, atMs: number): void {
	const { fast } = n;
	fast.reanchor = 0;
	const { boxSum, boxN, level } = fast;
	const now: Triple = [boxSum[0] / boxN, boxSum[1] / boxN, boxSum[2] / boxN];
	const by: Triple = [now[0] - level[0], now[1] - level[1], now[2] - level[2]];
	if (Math.max(...by.map(Math.abs)) <= stillMg(n)) return;
	const healed = takeHealed(g, n, by, atMs);
	set3(fast.level, now);
	touch(n);
	if (healed) return;
	shift3(fast.baseline, by);
	if (size3(by) >= n.params.stepRatio * onMg(n) && !atReference(n, now)) {
		doubtIt(n, 'the field jumped at a pulse without before and after', atMs);
	}
}
