import type { Vec3 } from '$lib/magnetics/vector';

/** A node's accepted quiet field (method 3), with what must be known to compare with it later. */
export interface DriftReference {
	atMs: number;
	/** b_ref. */
	fieldMg: Vec3;
	/** O_ref; null = no pair yet: what needs a direction is then off. */
	offsetMg: Vec3 | null;
	tempC: number | null;
	/** The site's geomagnetic line (h, e, z) at that time, where it was known. */
	lineMg?: Vec3;
}

/** One hour of still readings of one level. */
export interface HourRecord {
	/** Start of the hour, UTC ms. */
	hourMs: number;
	/** Median field B. */
	fieldMg: Vec3;
	/** Offset in use with it, zero where none: field + offset is the level that a better offset leaves alone. */
	offsetMg: Vec3;
	/** Median of temperatures smoothed over 10 min; null = no temperature near the readings. */
	tempC: number | null;
	n: number;
	/** Null = vacant; else names the stay: occupied hours tell the slope within one stay only. */
	stay: string | null;
}

/** A SET/RESET pair as read (mG, raw), accepted: `after` repeats `set` and the field was still around it. */
export interface PairRecord {
	atMs: number;
	setMg: Vec3;
	resetMg: Vec3;
	/** Polarity held and raw reading before the first pulse; null = did not come. */
	before: { polarity: 1 | -1; rawMg: Vec3 } | null;
	tempC: number | null;
	/** The bay's state: in an occupied bay a pair tells the bridge only. */
	vacant: boolean;
}

/** What the node's level has moved since the reference, hour by hour, by cause. Node axes, mG. */
export interface HourParts {
	hourMs: number;
	tempC: number | null;
	/** D = (b + O) - (b_ref + O_ref). */
	totalMg: Vec3;
	temperatureMg: Vec3;
	geomagneticMg: Vec3;
	bridgeMg: Vec3;
	/** Film loss, known only once a pulse has measured it; part of bridge in the method, kept apart. */
	filmMg: Vec3;
	surroundingsMg: Vec3;
	unexplainedMg: Vec3;
	/** Standard error of unexplained an axis; null = it cannot be judged (see `notes`). */
	errorMg: Vec3 | null;
	notes: readonly Note[];
}

/** Why an hour is judged with less, or not at all. */
export type Note =
	'slope_not_known' | 'no_temperature' | 'no_pair' | 'few_nodes' | 'site_change_cause_not_known';

export type SurroundingsKind = 'gain_or_field' | 'tilt' | 'steel_or_works';
export type Cause =
	'temperature' | 'geomagnetic' | 'bridge' | 'film' | SurroundingsKind | 'unexplained';

export interface NamedCause {
	cause: Cause;
	magnitudeMg: number;
}
