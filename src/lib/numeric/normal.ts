/**
 * The normal distribution to double precision. Own code: simple-statistics reads the distribution from a
 * table of four digits, and its quantile is good to three.
 */
const SQRT_TAU = Math.sqrt(2 * Math.PI);
/** Beyond this the series loses digits and the continued fraction is short. */
const SERIES_TO = 5;
/** Terms of the continued fraction; beyond 5 it settles to the last bit in far fewer. */
const FRACTION_TERMS = 60;

export const normalDensity = (z: number): number => Math.exp((-z * z) / 2) / SQRT_TAU;

/** Φ(z) - 1/2 = φ(z) Σ z^(2k+1) / (1·3·5 … (2k+1)). */
function centralArea(z: number): number {
	let term = z;
	let sum = z;
	for (let odd = 3; sum + term !== sum; odd += 2) {
		term *= (z * z) / odd;
		sum += term;
	}
	return normalDensity(z) * sum;
}

/** Upper tail for large z: φ(z) / (z + 1/(z + 2/(z + 3/(…)))). */
function tail(z: number): number {
	let below = z;
	for (let k = FRACTION_TERMS; k >= 1; k--) below = z + k / below;
	return normalDensity(z) / below;
}

/** Φ(z): share of a standard normal below z. */
export function normalCdf(z: number): number {
	if (Number.isNaN(z)) return NaN;
	if (z > SERIES_TO) return 1 - tail(z);
	if (z < -SERIES_TO) return tail(-z);
	return 0.5 + centralArea(z);
}

/** Two-sided p value of a standard normal score. */
export const twoSidedP = (z: number): number => 2 * normalCdf(-Math.abs(z));

/** Φ⁻¹(p) for 0 < p < 1, by bisection and Newton steps on `normalCdf`; ±Infinity at the ends. */
export function normalQuantile(p: number): number {
	if (p <= 0) return -Infinity;
	if (p >= 1) return Infinity;
	let low = -38;
	let high = 38;
	let z = 0;
	for (let i = 0; i < 200; i++) {
		const excess = normalCdf(z) - p;
		if (excess > 0) high = z;
		else low = z;
		const newton = z - excess / normalDensity(z);
		const next = newton > low && newton < high ? newton : (low + high) / 2;
		if (Math.abs(next - z) <= 1e-15 * Math.max(1, Math.abs(z))) return next;
		z = next;
	}
	return z;
}

/** z for a two-sided level such as 0.95. */
export const twoSidedZ = (level: number): number => normalQuantile(0.5 + level / 2);
