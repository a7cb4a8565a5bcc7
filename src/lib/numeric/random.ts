/**
 * Seeded random numbers for bootstrap and benches: the same seed gives the same result everywhere. A
 * multiply–shift hash of a counter; passes for resampling, not for secrets.
 */
export type Random = () => number;

const STEP = 0x9e37_79b9;

/** Uniform in [0, 1). */
export function seeded(seed: number): Random {
	let counter = seed >>> 0;
	return () => {
		counter = (counter + STEP) >>> 0;
		let x = counter;
		x = Math.imul(x ^ (x >>> 16), 0x21f0_aaad);
		x = Math.imul(x ^ (x >>> 15), 0x735a_2d97);
		return ((x ^ (x >>> 15)) >>> 0) / 0x1_0000_0000;
	};
}

/** Standard normal from uniform numbers (Box and Muller). */
export function gaussian(random: Random): number {
	const radius = Math.sqrt(-2 * Math.log(1 - random()));
	return radius * Math.cos(2 * Math.PI * random());
}
