import { pairOffset } from '$lib/magnetics/set-reset';
import { add, magnitude, subtract, ZERO, type Vec3 } from '$lib/magnetics/vector';
import {
	decompose,
	geomagneticPart,
	levelOf,
	rawDrift,
	temperaturePart,
	type Decomposed
} from './decompose';
import { frameOf, intoFrame, type Frame } from './frame';
import {
	diagnose,
	explainedBy,
	filmOf,
	NO_PAIRS,
	withPair,
	type Diagnosis,
	type PairState
} from './pairs';
import type { DriftSettings } from './params';
import type { LineVote, SiteLine } from './site-line';
import { addToSlope, breakSlope, SLOPE_START, slopeOf, type Slope, type SlopeState } from './slope';
import type { DriftReference, HourParts, HourRecord, PairRecord } from './types';
import { ownResidual, WATCH_START, watchHour, watchPair, type WatchState } from './watch';

/**
 * One node's drift, hour by hour. Plain data, bounded, and a pure function of reference, hours, pairs and the
 * site's line in order of time: rebuilt from stored readings it is the same.
 */
export interface NodeDrift {
	reference: DriftReference;
	/** Profile's κ, 1/°C. */
	tempcoPerC: number;
	frame: Frame | null;
	slopeState: SlopeState;
	slope: Slope | null;
	pairs: PairState;
	watch: WatchState;
	/** Geomagnetic change at the last closed hour, node axes. */
	geomagneticMg: Vec3;
	last: HourParts | null;
}

/** A film loss from here on is worth a new run of movement. */
const HEALED_MG = 2;

/** Starts at an accepted reference; the slope of a former one of the same sensor is worth keeping. */
export function startDrift(
	reference: DriftReference,
	tempcoPerC: number,
	former: NodeDrift | null = null
): NodeDrift {
	const slopeState = former === null ? SLOPE_START : breakSlope(former.slopeState);
	const pairs = former === null ? NO_PAIRS : keepOffsetSlope(former.pairs);
	return {
		reference,
		tempcoPerC,
		frame: reference.offsetMg === null ? null : frameOf(reference.fieldMg),
		slopeState,
		slope: former?.slope ?? null,
		pairs,
		watch: WATCH_START,
		geomagneticMg: ZERO,
		last: null
	};
}

/** Old pairs tell the offset's slope, but nothing since the new reference. */
const keepOffsetSlope = (pairs: PairState): PairState => ({ ...pairs, vacant: null, any: null });

function known(drift: NodeDrift): Decomposed {
	const { reference, frame, slope, pairs, tempcoPerC } = drift;
	return {
		reference,
		frame,
		slope,
		explained: explainedBy(reference, pairs, tempcoPerC, slope),
		pairTempC: pairs.vacant?.tempC ?? null
	};
}

/** What the node says of the site's line in this hour; null when it has nothing to say (method 5.2). */
export function voteOf(drift: NodeDrift, hour: HourRecord): LineVote | null {
	const { reference, frame, slope } = drift;
	if (hour.stay !== null || frame === null || reference.offsetMg === null || slope === null)
		return null;
	const temperature = temperaturePart(hour.tempC, reference, slope);
	if (temperature.note !== null) return null;
	const { explained } = known(drift);
	const moved = [temperature.partMg, explained.bridgeMg, explained.surroundingsMg].reduce(
		subtract,
		rawDrift(hour, reference)
	);
	return {
		residualMg: add(intoFrame(frame, moved), reference.lineMg ?? ZERO),
		ownMg: intoFrame(frame, ownResidual(drift.watch))
	};
}

/** Takes the hour into the slope, less what the site's line explains of it. */
function learnSlope(
	drift: NodeDrift,
	hour: HourRecord,
	geomagneticMg: Vec3,
	settings: DriftSettings
): NodeDrift {
	if (hour.tempC === null) return drift;
	const levelMg = subtract(levelOf(hour), geomagneticMg);
	const { hourMs, tempC, stay } = hour;
	const slopeState = addToSlope(drift.slopeState, { hourMs, levelMg, tempC, stay }, settings);
	return { ...drift, slopeState, slope: slopeOf(slopeState, settings) ?? drift.slope };
}

/**
 * Closes one hour, later than all before it, with the site's line of that hour. Occupied hours teach the
 * slope and give no parts.
 */
export function closeHour(
	drift: NodeDrift,
	hour: HourRecord,
	line: SiteLine,
	settings: DriftSettings
): { drift: NodeDrift; parts: HourParts | null } {
	const geomagneticMg = geomagneticPart(drift.frame, line, drift.reference).partMg;
	const learned = learnSlope(drift, hour, geomagneticMg, settings);
	if (hour.stay !== null) return { drift: { ...learned, geomagneticMg }, parts: null };
	const parts = decompose(hour, line, known(learned));
	const watch = watchHour(learned.watch, parts, settings);
	return { drift: { ...learned, geomagneticMg, watch, last: parts }, parts };
}

/** A reference without an offset takes it from the first pair; its level stays what it was. */
function completed(reference: DriftReference, pair: PairRecord): DriftReference {
	const offsetMg = pairOffset(pair.setMg, pair.resetMg);
	return { ...reference, offsetMg, fieldMg: subtract(reference.fieldMg, offsetMg) };
}

/**
 * Takes an accepted pair, which is a film refresh too. The diagnosis is null where it only completed a
 * reference that had no offset.
 */
export function applyPair(
	drift: NodeDrift,
	pair: PairRecord,
	settings: DriftSettings
): { drift: NodeDrift; diagnosis: Diagnosis | null } {
	const first = drift.reference.offsetMg === null;
	const reference = first ? completed(drift.reference, pair) : drift.reference;
	const at: NodeDrift = { ...drift, reference, frame: frameOf(reference.fieldMg) };
	const fallbackC = drift.last?.tempC ?? reference.tempC ?? 0;
	const pairs = withPair(at.pairs, pair, at.geomagneticMg, fallbackC, settings);
	const film = filmOf(pair);
	const healed = film !== null && magnitude(film) >= HEALED_MG ? 'film' : 'nothing';
	const next: NodeDrift = {
		...at,
		pairs,
		slopeState: healed === 'film' ? breakSlope(at.slopeState) : at.slopeState,
		watch: watchPair(at.watch, healed)
	};
	if (first) return { drift: next, diagnosis: null };
	const before = known(at).explained;
	const after = known(next).explained;
	return { drift: next, diagnosis: diagnose(pair, reference, before, after, settings) };
}
