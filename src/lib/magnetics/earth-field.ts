import geomagnetism, { type GeomagnetismModel } from 'geomagnetism';

/** World Magnetic Model at a place and time. mG and degrees; x north, y east, z down, declination east. */
export interface EarthField {
	xMg: number;
	yMg: number;
	zMg: number;
	horizontalMg: number;
	totalMg: number;
	inclinationDeg: number;
	declinationDeg: number;
	/** False outside 2025.0 to 2030.0: the model is then only carried on in a straight line. */
	withinModelYears: boolean;
}

const MG_PER_NT = 0.01;
const EPOCH = 2025;
const END = 2030;
const DEG = 180 / Math.PI;

/**
 * The package refuses dates after 2029-11-13 although the model runs to 2030.0, and takes every year for 365
 * days. The model is linear in time (WMM2025 report: coefficients plus years times their change), and so are
 * x, y, z: two dates a year apart whose fractions the package gets right, joined by a straight line, are exact.
 */
let ends: { first: GeomagnetismModel; second: GeomagnetismModel } | null = null;
function models() {
	ends ??= {
		first: geomagnetism.model(new Date(Date.UTC(EPOCH, 0))),
		second: geomagnetism.model(new Date(Date.UTC(EPOCH + 1, 0)))
	};
	return ends;
}

/** Decimal year of an instant, leap years counted with their 366 days. */
export function decimalYear(atMs: number): number {
	const year = new Date(atMs).getUTCFullYear();
	const startMs = Date.UTC(year, 0);
	return year + (atMs - startMs) / (Date.UTC(year + 1, 0) - startMs);
}

/** Field at latitude and longitude (degrees) and height above the WGS 84 ellipsoid (km), at a decimal year. */
export function earthField(
	latDeg: number,
	lonDeg: number,
	heightKm: number,
	year: number
): EarthField {
	const { first, second } = models();
	const place = [latDeg, lonDeg, heightKm];
	const from = first.point(place);
	const to = second.point(place);
	const at = (a: number, b: number) => (a + (year - EPOCH) * (b - a)) * MG_PER_NT;
	const xMg = at(from.x, to.x);
	const yMg = at(from.y, to.y);
	const zMg = at(from.z, to.z);
	const horizontalMg = Math.hypot(xMg, yMg);
	return {
		xMg,
		yMg,
		zMg,
		horizontalMg,
		totalMg: Math.hypot(horizontalMg, zMg),
		inclinationDeg: Math.atan2(zMg, horizontalMg) * DEG,
		declinationDeg: Math.atan2(yMg, xMg) * DEG,
		withinModelYears: year >= EPOCH && year <= END
	};
}

/** How a node's quiet field stands to the Earth's (method 8): a word to a person, never a refusal. */
export type EarthVerdict = 'agrees' | 'off' | 'wrong_resolution';

/** Buried steel bends the field by as much as this; more deserves a look. */
const WARN_SHARE = 0.35;
/** Counts of a 16-bit and an 18-bit sensor differ by 4; this far from it still counts as that mistake. */
const RESOLUTION_RATIO = 4;
const RESOLUTION_TOLERANCE = 0.2;

/** |b| of a node against the model's total field, both in mG. */
export function checkAgainstEarth(
	quietMg: number,
	earthMg: number
): { ratio: number; verdict: EarthVerdict } {
	const ratio = quietMg / earthMg;
	const near = (target: number) => Math.abs(ratio / target - 1) <= RESOLUTION_TOLERANCE;
	if (near(RESOLUTION_RATIO) || near(1 / RESOLUTION_RATIO))
		return { ratio, verdict: 'wrong_resolution' };
	return { ratio, verdict: Math.abs(ratio - 1) > WARN_SHARE ? 'off' : 'agrees' };
}
