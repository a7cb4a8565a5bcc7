import { add, dot, magnitude, scale, subtract, ZERO, type Vec3 } from '$lib/magnetics/vector';
import { outOfFrame, type Frame } from './frame';
import type { Explained } from './pairs';
import type { SiteLine } from './site-line';
import type { Slope } from './slope';
import type { DriftReference, HourParts, HourRecord, NamedCause, Note } from './types';

/** Level of the node, whatever offset was in use: b + O. */
export const levelOf = ({ fieldMg, offsetMg }: HourRecord): Vec3 => add(fieldMg, offsetMg);

/** Raw drift D = (b + O) - (b_ref + O_ref). */
export const rawDrift = (hour: HourRecord, reference: DriftReference): Vec3 =>
	subtract(levelOf(hour), add(reference.fieldMg, reference.offsetMg ?? ZERO));

/** k (T - T_ref); zero, with a note, where either is not known. */
export function temperaturePart(
	tempC: number | null,
	reference: DriftReference,
	slope: Slope | null
): { partMg: Vec3; note: Note | null } {
	if (tempC === null || reference.tempC === null) return { partMg: ZERO, note: 'no_temperature' };
	if (slope === null) return { partMg: ZERO, note: 'slope_not_known' };
	return { partMg: scale(slope.perC, tempC - reference.tempC), note: null };
}

/** Change of the site's line since this node's reference, node axes. */
export function geomagneticPart(
	frame: Frame | null,
	line: SiteLine,
	reference: DriftReference
): { partMg: Vec3; note: Note | null } {
	if (frame === null || reference.offsetMg === null) return { partMg: ZERO, note: 'no_pair' };
	if (line.verdict === 'few_nodes') return { partMg: ZERO, note: 'few_nodes' };
	if (line.verdict === 'cause_not_known')
		return { partMg: ZERO, note: 'site_change_cause_not_known' };
	return {
		partMg: outOfFrame(frame, subtract(line.changeMg, reference.lineMg ?? ZERO)),
		note: null
	};
}

/** Median of 60 readings, a pair of single ones: what stays unsure an axis at the best. */
const FLOOR_ERROR_MG = 0.3;

/**
 * Standard error of unexplained. A pair has measured all at its own temperature, so the slope's error counts
 * from there; from the reference where there was none.
 */
export function errorOf(slope: Slope, tempC: number, knownAtC: number): Vec3 {
	const axis = (i: 0 | 1 | 2) =>
		Math.hypot(FLOOR_ERROR_MG, slope.errorPerC[i] * (tempC - knownAtC));
	return [axis(0), axis(1), axis(2)];
}

export interface Decomposed {
	reference: DriftReference;
	frame: Frame | null;
	slope: Slope | null;
	explained: Explained;
	/** Temperature of the last pair in a vacant bay, if any. */
	pairTempC: number | null;
}

/** One vacant hour by cause (method 5). */
export function decompose(hour: HourRecord, line: SiteLine, known: Decomposed): HourParts {
	const { reference, frame, slope, explained } = known;
	const totalMg = rawDrift(hour, reference);
	const temperature = temperaturePart(hour.tempC, reference, slope);
	const geomagnetic = geomagneticPart(frame, line, reference);
	const parts = [
		temperature.partMg,
		geomagnetic.partMg,
		explained.bridgeMg,
		explained.surroundingsMg
	];
	const errorMg =
		slope === null || hour.tempC === null || reference.tempC === null
			? null
			: errorOf(slope, hour.tempC, known.pairTempC ?? reference.tempC);
	const notes = [temperature.note, geomagnetic.note].filter((note) => note !== null);
	return {
		hourMs: hour.hourMs,
		tempC: hour.tempC,
		totalMg,
		temperatureMg: temperature.partMg,
		geomagneticMg: geomagnetic.partMg,
		bridgeMg: explained.bridgeMg,
		filmMg: ZERO,
		surroundingsMg: explained.surroundingsMg,
		unexplainedMg: parts.reduce(subtract, totalMg),
		errorMg,
		notes
	};
}

/** Length of a vector less 2 standard errors along it: what a limit is held against (method 2). */
export function sureMagnitude(v: Vec3, errorMg: Vec3): number {
	const length = magnitude(v);
	if (length === 0) return 0;
	const along = Math.hypot(v[0] * errorMg[0], v[1] * errorMg[1], v[2] * errorMg[2]) / length;
	return Math.max(0, length - 2 * along);
}

/**
 * Writes a film loss that a pulse has just measured into the hours since the drift began: there it leaves
 * unexplained, as far as that pointed its way and no further than what was lost.
 */
export function writeFilmBack(
	hours: readonly HourParts[],
	filmMg: Vec3,
	sinceMs: number,
	pulseMs: number
): HourParts[] {
	const square = dot(filmMg, filmMg);
	return hours.map((hour) => {
		if (square === 0 || hour.hourMs < sinceMs || hour.hourMs >= pulseMs) return hour;
		const share = Math.min(1, Math.max(0, dot(hour.unexplainedMg, filmMg) / square));
		const part = scale(filmMg, share);
		return { ...hour, filmMg: part, unexplainedMg: subtract(hour.unexplainedMg, part) };
	});
}

/**
 * The cause to name for an hour: the largest of what is out of the ordinary once it passes `leastMg`; else
 * the larger of temperature and geomagnetic, which are compensated; null where nothing has moved.
 */
export function namedCause(
	parts: HourParts,
	kind: 'gain_or_field' | 'tilt' | 'steel_or_works',
	leastMg: number
): NamedCause | null {
	const of = (cause: NamedCause['cause'], v: Vec3): NamedCause => ({
		cause,
		magnitudeMg: magnitude(v)
	});
	const pick = (causes: NamedCause[]): NamedCause | null =>
		causes
			.filter(({ magnitudeMg }) => magnitudeMg >= leastMg)
			.sort((a, b) => b.magnitudeMg - a.magnitudeMg)[0] ?? null;
	return (
		pick([
			of('bridge', parts.bridgeMg),
			of('film', parts.filmMg),
			of(kind, parts.surroundingsMg),
			of('unexplained', parts.unexplainedMg)
		]) ?? pick([of('temperature', parts.temperatureMg), of('geomagnetic', parts.geomagneticMg)])
	);
}
