import type { Vec3 } from '$lib/magnetics/vector';

/** What befalls one node's sensor or its surroundings, in true time. */
export type NodeEvent =
	/** The film loses gain evenly until `toMs`: at the end `remaining` of each axis is left. */
	| { kind: 'loss'; atMs: number; toMs: number; remaining: Vec3 }
	/** The film of these axes turns over. */
	| { kind: 'flip'; atMs: number; axes: readonly (0 | 1 | 2)[] }
	/** A strong magnet is held over the node: overload for a while, then a film left anyhow. */
	| { kind: 'magnet'; atMs: number; durationMs: number; peakMg: number; leaves: Vec3 }
	/** The bridge offset moves, at once or evenly until `toMs`. */
	| { kind: 'offset'; atMs: number; toMs: number; byMg: Vec3 }
	/** Steel is laid, or the housing is knocked: a lasting change of field in the node's axes. */
	| { kind: 'surroundings'; atMs: number; byMg: Vec3 }
	| { kind: 'tilt'; atMs: number; rollDeg: number; pitchDeg: number }
	/** A pulse ordered over the wire (its command is the caller's affair), or a power-on SET. */
	| { kind: 'pulse'; atMs: number; verb: 'set' | 'reset' | 'pair' }
	| { kind: 'reboot'; atMs: number; offMs: number; cause: string };

export interface Sensor {
	countsPerGauss: number;
	/** Signed counts: -limit .. limit - 1. */
	limit: number;
	/** Rms of one sample of one axis, mG. */
	noiseMg: number;
	/** Offset of bridge and electronics at the reference temperature, mG, and its slope, mG/°C. */
	offsetMg: Vec3;
	offsetPerC: Vec3;
	/** Sensitivity tempco, 1/°C. */
	kappaPerC: number;
	referenceC: number;
}

/** The film and what has happened to it; plain data that the node carries from sample to sample. */
export interface Film {
	gain: [number, number, number];
	/** Change of gain per ms while a loss runs; zero otherwise. */
	lossPerMs: [number, number, number];
	lossUntilMs: number;
	polarity: 1 | -1;
	offsetExtraMg: [number, number, number];
	offsetPerMs: [number, number, number];
	offsetUntilMs: number;
	magnetFromMs: number;
	magnetUntilMs: number;
	magnetPeakMg: number;
	atMs: number;
}

export const freshFilm = (atMs: number): Film => ({
	gain: [1, 1, 1],
	lossPerMs: [0, 0, 0],
	lossUntilMs: -Infinity,
	polarity: 1,
	offsetExtraMg: [0, 0, 0],
	offsetPerMs: [0, 0, 0],
	offsetUntilMs: -Infinity,
	magnetFromMs: -Infinity,
	magnetUntilMs: -Infinity,
	magnetPeakMg: 0,
	atMs
});

/** Lets running losses and offset drifts go on until a time. */
export function ageFilm(film: Film, atMs: number): void {
	const lossMs = Math.min(atMs, film.lossUntilMs) - film.atMs;
	const driftMs = Math.min(atMs, film.offsetUntilMs) - film.atMs;
	film.atMs = atMs;
	if (lossMs <= 0 && driftMs <= 0) return;
	for (let axis = 0; axis < 3; axis++) {
		if (lossMs > 0) film.gain[axis]! += film.lossPerMs[axis]! * lossMs;
		if (driftMs > 0) film.offsetExtraMg[axis]! += film.offsetPerMs[axis]! * driftMs;
	}
}

/** A pulse restores gain and direction and leaves the offset alone (method 2). */
export function healFilm(film: Film, polarity: 1 | -1): void {
	film.gain = [1, 1, 1];
	film.polarity = polarity;
}

/** Applies what befalls the film at `event.atMs`; the film must have been aged to then. */
export function strikeFilm(film: Film, event: NodeEvent): void {
	if (event.kind === 'loss') {
		const spanMs = Math.max(1, event.toMs - event.atMs);
		film.lossPerMs = event.remaining.map(
			(left, axis) => (film.gain[axis]! * (left - 1)) / spanMs
		) as [number, number, number];
		film.lossUntilMs = event.toMs;
	} else if (event.kind === 'flip') {
		for (const axis of event.axes) film.gain[axis] *= -1;
		film.lossUntilMs = -Infinity;
	} else if (event.kind === 'magnet') {
		film.magnetFromMs = event.atMs;
		film.magnetUntilMs = event.atMs + event.durationMs;
		film.magnetPeakMg = event.peakMg;
		film.gain = [...event.leaves] as [number, number, number];
		film.lossUntilMs = -Infinity;
	} else if (event.kind === 'offset') {
		const spanMs = event.toMs - event.atMs;
		if (spanMs <= 0) event.byMg.forEach((by, axis) => (film.offsetExtraMg[axis]! += by));
		else {
			film.offsetPerMs = event.byMg.map((by) => by / spanMs) as [number, number, number];
			film.offsetUntilMs = event.toMs;
		}
	}
}

/** Shape of a magnet's pass: up, hold, down. */
export function magnetFieldMg(film: Film, atMs: number): number {
	if (atMs < film.magnetFromMs || atMs >= film.magnetUntilMs) return 0;
	const share = (atMs - film.magnetFromMs) / (film.magnetUntilMs - film.magnetFromMs);
	return film.magnetPeakMg * Math.min(1, 4 * Math.min(share, 1 - share));
}

/**
 * What one axis of the bridge says, mG, before noise: r = p m B (1 + κ ΔT) + O + k ΔT (method 2, check-values 5d).
 * `polarity` is the film's magnetization after the last pulse.
 */
export function bridgeMg(
	sensor: Sensor,
	film: Film,
	fieldMg: Vec3,
	tempC: number,
	axis: 0 | 1 | 2
): number {
	const deltaC = tempC - sensor.referenceC;
	return (
		film.gain[axis] * film.polarity * (1 + sensor.kappaPerC * deltaC) * fieldMg[axis] +
		sensor.offsetMg[axis] +
		film.offsetExtraMg[axis] +
		sensor.offsetPerC[axis] * deltaC
	);
}

/** mG at the bridge → signed counts, held at the ends of the range. */
export function toCounts(sensor: Sensor, rawMg: number): number {
	const counts = Math.round((rawMg * sensor.countsPerGauss) / 1000);
	return Math.max(-sensor.limit, Math.min(sensor.limit - 1, counts));
}
