import { dot, magnitude, scale, subtract, type Vec3 } from './vector';

/**
 * Field of a point dipole in mG: B = (µ0/4π) [3 r̂ (m·r̂) - m] / r³, moment in A·m², distance in m
 * (Wahlström and Gustafsson 2014; check-values 6). µ0/4π is 1e-7 T·m/A, which is exactly 1 in mG·m³/(A·m²)
 * to one part in 10^9. Holds from about 3 times the target's size on; nearer, use a chain of dipoles.
 */
export function dipoleFieldMg(momentAm2: Vec3, offsetM: Vec3): Vec3 {
	const r = magnitude(offsetM);
	const unit = scale(offsetM, 1 / r);
	return scale(subtract(scale(unit, 3 * dot(momentAm2, unit)), momentAm2), 1 / r ** 3);
}
