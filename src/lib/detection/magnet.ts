import { doubtIt, enter } from './entries';
import { evidence, stepWords } from './evidence';
import {
	STRONG_FIELD,
	touch,
	triple,
	type Group,
	type Node,
	type Step,
	type Triple
} from './state';
import { offMg, stillMg } from './thresholds';
import { apart, set3, size3 } from './vec';

/** A strong field leaves at most this much of an axis. */
const FILM_KEEPS = 0.95;
/** An axis that has kept less than this is too weak to be read through: its noise would grow past use. */
const LEAST_GAIN = 0.12;
/** A vehicle that leaves takes all but this share of its own step with it. */
const LEFT_SHARE = 0.15;
const SAME_SHARE = 0.1;

/** Could a weakened or turned film alone have made this step? A vehicle makes some axis grow. */
export function filmCould(n: Node, step: Step): boolean {
	// Without an offset an axis has no zero; after a first magnet the film is no measure any more.
	if (n.slow.offset === null || n.slow.magnet !== null) return true;
	const { level } = n.fast;
	return ([0, 1, 2] as const).every(
		(i) => Math.abs(level[i]) <= FILM_KEEPS * Math.abs(level[i] - step.j[i]) + stillMg(n)
	);
}

function vehicleLeft(n: Node): boolean {
	const { arrival, state } = n.slow;
	if (state !== 'occupied' || arrival === null) return false;
	const rest = apart(n.fast.level, n.fast.baseline);
	return rest <= Math.max(offMg(n), LEFT_SHARE * size3(arrival.step));
}

/**
 * A step with a clipped row, or rows past what the film bears, is a magnet's (method 4), unless it is what
 * only a vehicle can do: an axle close over the node may pass that limit too. State and known fields stay;
 * from here on the node is read through what the film has kept of each axis.
 */
export function takeMagnet(n: Node, step: Step): boolean {
	if (!step.clipped || !filmCould(n, step) || vehicleLeft(n)) return false;
	const { slow, fast } = n;
	slow.magnet = {
		atMs: step.atMs,
		uncertaintyS: step.uncertaintyS,
		signs: slow.signs,
		baseline: triple(fast.baseline),
		j: step.j
	};
	slow.signs = [...slow.signs];
	for (const i of [0, 1, 2] as const) readThrough(n, step, i);
	fast.boxN = 0;
	step.became = 'film';
	noteStrongField(n, step);
	return true;
}

/** Whatever it left behind, a field past what the film bears asks for a pulse and makes the bay doubtful. */
export function noteStrongField(n: Node, step: Step): void {
	n.slow.refreshWhy = STRONG_FIELD;
	doubtIt(n, 'magnet', step.atMs);
	touch(n);
}

/**
 * One axis: what it showed before over what it shows now is its gain turned round. An axis too weak for that
 * keeps its weak reading, and what is known of it is weakened alike; one too small to show a gain just moves.
 */
function readThrough(n: Node, step: Step, i: 0 | 1 | 2): void {
	const { fast, slow, params } = n;
	const now = fast.level[i];
	const before = now - step.j[i];
	if (slow.offset === null || Math.abs(before) < params.invertedAxisMg) {
		fast.baseline[i] += step.j[i];
		return;
	}
	if (Math.abs(now) < LEAST_GAIN * Math.abs(before)) {
		weaken(n, i, now / before);
		return;
	}
	const ratio = before / now;
	slow.signs[i] *= ratio;
	fast.noise[i] *= Math.abs(ratio);
	fast.last[i] *= ratio;
	fast.level[i] = before;
}

function weaken(n: Node, i: 0 | 1 | 2, gain: number): void {
	n.fast.baseline[i] *= gain;
	const { arrival } = n.slow;
	if (arrival === null) return;
	const { step, first } = arrival;
	n.slow.arrival = { ...arrival, step: [...step], first: [...first] };
	n.slow.arrival.step[i] *= gain;
	n.slow.arrival.first[i] *= gain;
}

/**
 * A step that brings the sensor back, without a pulse, to what it showed before the supposed magnet: no film
 * heals by itself, so it was a vehicle that came then and leaves now.
 */
export function revealVehicle(g: Group, n: Node, step: Step, atMs: number): void {
	const { slow, fast } = n;
	const { magnet } = slow;
	if (magnet === null || slow.state !== 'vacant') return;
	const plain = triple(fast.level).map(
		(v, i) => (v * magnet.signs[i as 0]) / slow.signs[i as 0]
	) as Triple;
	const same = Math.max(2 * stillMg(n), SAME_SHARE * size3(magnet.j));
	if (apart(plain, magnet.baseline) > same) return;
	for (const i of [0, 1, 2] as const) fast.noise[i] *= Math.abs(magnet.signs[i] / slow.signs[i]);
	slow.signs = magnet.signs;
	slow.magnet = null;
	slow.doubt = null;
	set3(fast.baseline, magnet.baseline);
	set3(fast.level, plain);
	set3(fast.last, plain);
	fast.boxN = 0;
	const { j } = magnet;
	slow.arrival = { step: j, first: j, atMs: magnet.atMs };
	fast.stayMg = Math.fround(size3(j));
	step.j = [-j[0], -j[1], -j[2]];
	enter(
		g,
		n,
		{
			type: 'arrival',
			state: 'occupied',
			atMs: magnet.atMs,
			uncertaintyS: magnet.uncertaintyS,
			confidence: 0.9,
			evidence: evidence([
				`${stepWords({ ...step, j }, 'moved')}: no magnet, for the field came back by itself`
			])
		},
		atMs
	);
}

/** A pulse has healed the film: it is read as it is again. */
export function forgetFilm(n: Node): void {
	const { slow, fast } = n;
	for (const i of [0, 1, 2] as const) fast.noise[i] /= Math.max(1, Math.abs(slow.signs[i]));
	slow.signs = [1, 1, 1];
	slow.magnet = null;
}
