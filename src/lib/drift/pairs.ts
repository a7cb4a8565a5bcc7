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
interface SplitSlope {
	offset: Vec3;
	field: Vec3;
}

/** How far the true κ may lie from the profile's, as a share of it. */
const TEMPCO_DOUBT = 0.2;

/**
 * k_O and the field's own slope. Until pairs tell k_O it is k - κ b_ref. Once they do, it is theirs, held within
 * what κ may be off: an offset that drifts while the season turns looks like a slope, and would take the field's
 * part with it.
 */
export function splitSlope(
	reference: DriftReference,
	tempcoPerC: number,
	slope: Slope | null,
	offsetPerC: Vec3 | null
): SplitSlope {
	const byProfile = scale(reference.fieldMg, tempcoPerC);
	if (slope === null) return { offset: offsetPerC ?? ZERO, field: byProfile };
	const rest = subtract(slope.perC, byProfile);
	if (offsetPerC === null) return { offset: rest, field: byProfile };
	const doubt = TEMPCO_DOUBT * Math.abs(tempcoPerC) * magnitude(reference.fieldMg);
	const held = (i: 0 | 1 | 2) =>
		Math.min(rest[i] + doubt, Math.max(rest[i] - doubt, offsetPerC[i]));
	const offset: Vec3 = [held(0), held(1), held(2)];
	return { offset, field: subtract(slope.perC, offset) };
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

/** What of the site's and the node's state a pair is read with. */
export interface PairSetting {
	geomagneticMg: Vec3;
	/** For a pair that came without a temperature. */
	fallbackTempC: number;
	/** k_O as used so far. */
	offsetPerC: Vec3;
}

/** Takes an accepted pair. One whose offset jumped begins a new series for k_O. */
export function withPair(
	state: PairState,
	pair: PairRecord,
	{ geomagneticMg, fallbackTempC, offsetPerC }: PairSetting,
	settings: DriftSettings
): PairState {
	const point: PairPoint = {
		atMs: pair.atMs,
		fieldMg: pairField(pair.setMg, pair.resetMg),
		offsetMg: pairOffset(pair.setMg, pair.resetMg),
		tempC: pair.tempC ?? fallbackTempC,
		geomagneticMg
	};
	const last = state.kept.at(-1);
	const expected = scale(offsetPerC, last === undefined ? 0 : point.tempC - last.tempC);
	const moved = subtract(point.offsetMg, last?.offsetMg ?? point.offsetMg);
	const jumped = magnitude(subtract(moved, expected)) > JUMP_MG;
	const kept = [...(jumped ? [] : state.kept), point].slice(-KEPT);
	return {
		vacant: pair.vacant ? point : state.vacant,
		any: point,
		kept,
		offsetPerC: offsetSlope(kept, settings.offsetSlopeSpanC) ?? state.offsetPerC
	};
}
