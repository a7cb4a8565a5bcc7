import { pairOffset } from '$lib/magnetics/set-reset';
import { add, magnitude, scale, subtract, ZERO, type Vec3 } from '$lib/magnetics/vector';
import {
	decompose,
	geomagneticPart,
	levelOf,
	rawDrift,
	temperaturePart,
	type Decomposed
} from './decompose';
import { unflipped } from './flipped';
import { frameOf, intoFrame, type Frame } from './frame';
import {
	diagnose,
	explainedBy,
	filmOf,
	NO_PAIRS,
	splitSlope,
	withPair,
	type Diagnosis,
	type PairSetting,
	type PairState
} from './pairs';
import type { DriftSettings } from './params';
import type { LineVerdict, LineVote, SiteLine } from './site-line';
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
	/** Geomagnetic change at the last closed hour, node axes; zero where it was not known. */
	geomagneticMg: Vec3;
	line: LineVerdict;
	/** First hour of the running stay, from which an occupied node votes. */
	stay: StayAnchor | null;
	last: HourParts | null;
}

interface StayAnchor {
	stay: string;
	levelMg: Vec3;
	tempC: number;
	/** The site's line then. */
	lineMg: Vec3;
}

/** A film loss from here on is worth a new run of movement. */
export const HEALED_MG = 2;

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
		line: 'few_nodes',
		stay: null,
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

/** An occupied node tells what has changed since its stay began: a parked vehicle keeps still too. */
function voteFromStay({ frame, slope, stay }: NodeDrift, hour: HourRecord): LineVote | null {
	if (frame === null || slope === null || stay === null || stay.stay !== hour.stay) return null;
	if (hour.tempC === null) return null;
	const warming = scale(slope.perC, hour.tempC - stay.tempC);
	const movedMg = subtract(subtract(levelOf(hour), stay.levelMg), warming);
	return { residualMg: add(stay.lineMg, intoFrame(frame, movedMg)), ownMg: ZERO };
}

/** What the node says of the site's line in this hour; null when it has nothing to say (method 5.2). */
export function voteOf(drift: NodeDrift, read: HourRecord): LineVote | null {
	const hour = unflipped(read, drift.reference);
	if (hour.stay !== null) return voteFromStay(drift, hour);
	const { reference, frame, slope } = drift;
	if (frame === null || reference.offsetMg === null || slope === null) return null;
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

function anchored({ stay }: NodeDrift, hour: HourRecord, line: SiteLine): StayAnchor | null {
	if (hour.stay === null || hour.tempC === null) return null;
	if (stay?.stay === hour.stay) return stay;
	if (line.verdict !== 'known') return null;
	const { tempC } = hour;
	return { stay: hour.stay, levelMg: levelOf(hour), tempC, lineMg: line.changeMg };
}

/**
 * Takes the hour into the slope: the level as it is. Less the site's line it would feed itself, since the line
 * holds whatever slope error the nodes share (on the bench it then locked in 0.2 mG/°C of it).
 */
function learnSlope(drift: NodeDrift, hour: HourRecord, settings: DriftSettings): NodeDrift {
	if (hour.tempC === null) return drift;
	const { hourMs, tempC, stay } = hour;
	const point = { hourMs, levelMg: levelOf(hour), tempC, stay };
	const slopeState = addToSlope(drift.slopeState, point, settings);
	return { ...drift, slopeState, slope: slopeOf(slopeState, settings) ?? drift.slope };
}

/**
 * Closes one hour, later than all before it, with the site's line of that hour. Occupied hours teach the
 * slope and give no parts.
 */
export function closeHour(
	drift: NodeDrift,
	read: HourRecord,
	line: SiteLine,
	settings: DriftSettings
): { drift: NodeDrift; parts: HourParts | null } {
	const hour = unflipped(read, drift.reference);
	const geomagneticMg = geomagneticPart(drift.frame, line, drift.reference).partMg;
	const learned: NodeDrift = {
		...learnSlope(drift, hour, settings),
		geomagneticMg,
		line: line.verdict,
		stay: anchored(drift, hour, line)
	};
	if (hour.stay !== null) return { drift: learned, parts: null };
	const parts = decompose(hour, line, known(learned));
	const watch = watchHour(learned.watch, parts, settings);
	return { drift: { ...learned, watch, last: parts }, parts };
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
	// While a whole site moves and nobody knows why, a pair would take that for the node's surroundings.
	const told = { ...pair, vacant: pair.vacant && at.line !== 'cause_not_known' };
	const pairs = withPair(at.pairs, told, pairSetting(at), settings);
	const film = filmOf(pair);
	const healed = film !== null && magnitude(film) >= HEALED_MG ? 'film' : 'nothing';
	const next: NodeDrift = {
		...at,
		pairs,
		slopeState: healed === 'film' ? breakSlope(at.slopeState) : at.slopeState,
		watch: watchPair(at.watch, healed)
	};
	if (first) return { drift: next, diagnosis: null };
	// One k_O on both sides: what the pair adds to it is no change of the bridge.
	const after = known({ ...next, pairs: { ...pairs, offsetPerC: at.pairs.offsetPerC } }).explained;
	return {
		drift: next,
		diagnosis: diagnose(told, reference, known(at).explained, after, settings)
	};
}

/**
 * A pulse without a pair, or a pair that was refused: the film may have been healed, so the level may have
 * stepped, and nothing was measured.
 */
export const applyPulse = (drift: NodeDrift): NodeDrift => ({
	...drift,
	slopeState: breakSlope(drift.slopeState)
});

function pairSetting(drift: NodeDrift): PairSetting {
	const { reference, tempcoPerC, slope, pairs, last, geomagneticMg } = drift;
	return {
		geomagneticMg,
		fallbackTempC: last?.tempC ?? reference.tempC ?? 0,
		offsetPerC: splitSlope(reference, tempcoPerC, slope, pairs.offsetPerC).offset
	};
}
