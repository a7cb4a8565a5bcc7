import { theilSen } from '$lib/numeric/theil-sen';
import { fieldOf, pairField, pairOffset } from '$lib/magnetics/set-reset';
import {
	add,
	angleDeg,
	dot,
	magnitude,
	scale,
	subtract,
	ZERO,
	type Vec3
} from '$lib/magnetics/vector';
import type { DriftSettings } from './params';
import type { Slope } from './slope';
import type { DriftReference, NamedCause, PairRecord, SurroundingsKind } from './types';

/** A pair in the form that drift keeps of it. */
export interface PairPoint {
	atMs: number;
	fieldMg: Vec3;
	offsetMg: Vec3;
	tempC: number;
	/** Geomagnetic change since the reference at that time, node axes. */
	geomagneticMg: Vec3;
}

export interface PairState {
	/** Last pair in a vacant bay: bridge and surroundings. */
	vacant: PairPoint | null;
	/** Last pair in any bay: bridge alone. */
	any: PairPoint | null;
	/** Pairs since the offset last jumped, for its slope; at most `KEPT`. */
	kept: readonly PairPoint[];
	/** k_O, mG/°C; kept over a jump until new pairs span enough. */
	offsetPerC: Vec3 | null;
}

export const NO_PAIRS: PairState = { vacant: null, any: null, kept: [], offsetPerC: null };
const KEPT = 30;
const MIN_PAIRS = 3;
const JUMP_MG = 10;

/** k_O by Theil–Sen over pairs once three span 10 °C (method 2). */
function offsetSlope(points: readonly PairPoint[], spanC: number): Vec3 | null {
	const temps = points.map(({ tempC }) => tempC);
	if (points.length < MIN_PAIRS || Math.max(...temps) - Math.min(...temps) < spanC) return null;
	const axis = (i: 0 | 1 | 2) =>
		theilSen(
			temps,
			points.map(({ offsetMg }) => offsetMg[i])
		)?.slope ?? 0;
	return [axis(0), axis(1), axis(2)];
}

/** How offset and field move with temperature; together the total slope k where it is known. */
export function splitSlope(
	reference: DriftReference,
	tempcoPerC: number,
	slope: Slope | null,
	offsetPerC: Vec3 | null
): { offset: Vec3; field: Vec3 } {
	const byProfile = scale(reference.fieldMg, tempcoPerC);
	if (slope === null) return { offset: offsetPerC ?? ZERO, field: byProfile };
	if (offsetPerC === null) return { offset: subtract(slope.perC, byProfile), field: byProfile };
	// Both measured: the field's own slope is what is left of k, which is truer than the profile's κ.
	return { offset: offsetPerC, field: subtract(slope.perC, offsetPerC) };
}

/** What pairs explain since the reference (method 5.3, 5.4), at reference temperature. */
export interface Explained {
	bridgeMg: Vec3;
	surroundingsMg: Vec3;
}

export function explainedBy(
	reference: DriftReference,
	pairs: PairState,
	tempcoPerC: number,
	slope: Slope | null
): Explained {
	const { offset, field } = splitSlope(reference, tempcoPerC, slope, pairs.offsetPerC);
	const warmer = ({ tempC }: PairPoint) => tempC - (reference.tempC ?? tempC);
	const bridge = (p: PairPoint) =>
		subtract(subtract(p.offsetMg, reference.offsetMg ?? p.offsetMg), scale(offset, warmer(p)));
	const surroundings = (p: PairPoint) =>
		subtract(
			subtract(subtract(p.fieldMg, reference.fieldMg), scale(field, warmer(p))),
			p.geomagneticMg
		);
	return {
		bridgeMg: pairs.any === null ? ZERO : bridge(pairs.any),
		surroundingsMg: pairs.vacant === null ? ZERO : surroundings(pairs.vacant)
	};
}

/** What a change of the healed field from `from` to `to` is consistent with (method 5.4). */
export function surroundingsKind(from: Vec3, to: Vec3, settings: DriftSettings): SurroundingsKind {
	const shift = subtract(to, from);
	const along = dot(shift, from) / magnitude(from);
	const across = Math.sqrt(Math.max(0, magnitude(shift) ** 2 - along ** 2));
	const sameDirection =
		angleDeg(from, to) <= settings.gainAngleDeg && across <= settings.gainShareAcross * -along;
	if (sameDirection) return 'gain_or_field';
	const kept = Math.abs(magnitude(to) - magnitude(from)) <= settings.tiltMagnitudeMg;
	return kept ? 'tilt' : 'steel_or_works';
}

/** What a pair has told: every pair is a film refresh, and says what it healed. */
export interface Diagnosis {
	atMs: number;
	/** B_before - B_after; null without the reading before the pulse: not known. */
	filmMg: Vec3 | null;
	bridgeChangeMg: Vec3;
	/** Null in an occupied bay. */
	surroundingsChangeMg: Vec3 | null;
	surroundingsKind: SurroundingsKind | null;
	/** The largest of the three. */
	named: NamedCause;
}

/** Film loss with the pair's own offset, which a pulse does not change (method 2). */
export function filmOf(pair: PairRecord): Vec3 | null {
	if (pair.before === null) return null;
	const offset = pairOffset(pair.setMg, pair.resetMg);
	const before = fieldOf(pair.before.rawMg, pair.before.polarity, offset);
	return subtract(before, pairField(pair.setMg, pair.resetMg));
}

function largest(causes: readonly NamedCause[]): NamedCause {
	return causes.reduce((most, one) => (one.magnitudeMg > most.magnitudeMg ? one : most));
}

export function diagnose(
	pair: PairRecord,
	reference: DriftReference,
	before: Explained,
	after: Explained,
	settings: DriftSettings
): Diagnosis {
	const filmMg = filmOf(pair);
	const bridgeChangeMg = subtract(after.bridgeMg, before.bridgeMg);
	const causes: NamedCause[] = [{ cause: 'bridge', magnitudeMg: magnitude(bridgeChangeMg) }];
	if (filmMg !== null) causes.push({ cause: 'film', magnitudeMg: magnitude(filmMg) });
	const told = { atMs: pair.atMs, filmMg, bridgeChangeMg };
	if (!pair.vacant)
		return {
			...told,
			surroundingsChangeMg: null,
			surroundingsKind: null,
			named: largest(causes)
		};
	const surroundingsChangeMg = subtract(after.surroundingsMg, before.surroundingsMg);
	const kind = surroundingsKind(
		add(reference.fieldMg, before.surroundingsMg),
		add(reference.fieldMg, after.surroundingsMg),
		settings
	);
	causes.push({ cause: kind, magnitudeMg: magnitude(surroundingsChangeMg) });
	return { ...told, surroundingsChangeMg, surroundingsKind: kind, named: largest(causes) };
}

/** Takes an accepted pair; one without a temperature only where the reference has none either. */
export function withPair(
	state: PairState,
	pair: PairRecord,
	geomagneticMg: Vec3,
	fallbackTempC: number,
	settings: DriftSettings
): PairState {
	const point: PairPoint = {
		atMs: pair.atMs,
		fieldMg: pairField(pair.setMg, pair.resetMg),
		offsetMg: pairOffset(pair.setMg, pair.resetMg),
		tempC: pair.tempC ?? fallbackTempC,
		geomagneticMg
	};
	const last = state.any;
	const expected = scale(state.offsetPerC ?? ZERO, last === null ? 0 : point.tempC - last.tempC);
	const jumped =
		last !== null &&
		magnitude(subtract(subtract(point.offsetMg, last.offsetMg), expected)) > JUMP_MG &&
		state.offsetPerC !== null;
	const kept = [...(jumped ? [] : state.kept), point].slice(-KEPT);
	return {
		vacant: pair.vacant ? point : state.vacant,
		any: point,
		kept,
		offsetPerC: offsetSlope(kept, settings.offsetSlopeSpanC) ?? state.offsetPerC
	};
}
