/** Seeded randomness for everything the simulator invents; the same seed gives the same world. */
export interface Random {
	/** [0, 1) */
	uniform(): number;
	/** Standard normal. */
	normal(): number;
	between(low: number, high: number): number;
	/** Whole number in [low, high]. */
	whole(low: number, high: number): number;
	chance(share: number): boolean;
	pick<T>(items: readonly T[]): T;
	/** Exponential with the given mean. */
	exponential(mean: number): number;
	/** Log-normal by median and sigma of the logarithm, held inside [low, high] by drawing again. */
	logNormal(median: number, sigma: number, low: number, high: number): number;
}

/** FNV-1a over the labels: a 32-bit seed of its own for each named thing. */
export function seedOf(seed: number, ...labels: readonly (string | number)[]): number {
	let hash = (0x811c9dc5 ^ seed) >>> 0;
	for (const label of labels) {
		for (const char of `${label}|`) hash = Math.imul(hash ^ char.charCodeAt(0), 0x01000193) >>> 0;
	}
	return hash;
}

/** sfc32 (Doty-Humphrey's small fast counting generator), started from one 32-bit seed. */
function sfc32(seed: number): () => number {
	let a = 0x9e3779b9;
	let b = 0x243f6a88;
	let c = seed | 0;
	let counter = 1;
	const next = () => {
		const sum = (a + b + counter) | 0;
		counter = (counter + 1) | 0;
		a = b ^ (b >>> 9);
		b = (c + (c << 3)) | 0;
		c = ((c << 21) | (c >>> 11)) + sum;
		return (sum >>> 0) / 4294967296;
	};
	for (let i = 0; i < 12; i++) next();
	return next;
}

export function random(seed: number, ...labels: readonly (string | number)[]): Random {
	const uniform = sfc32(seedOf(seed, ...labels));
	let spare = NaN;
	const normal = () => {
		if (!Number.isNaN(spare)) {
			const value = spare;
			spare = NaN;
			return value;
		}
		// Marsaglia's polar method: two normals from one point inside the unit circle.
		for (;;) {
			const u = 2 * uniform() - 1;
			const v = 2 * uniform() - 1;
			const s = u * u + v * v;
			if (s > 0 && s < 1) {
				const factor = Math.sqrt((-2 * Math.log(s)) / s);
				spare = v * factor;
				return u * factor;
			}
		}
	};
	const self: Random = {
		uniform,
		normal,
		between: (low, high) => low + (high - low) * uniform(),
		whole: (low, high) => low + Math.floor((high - low + 1) * uniform()),
		chance: (share) => uniform() < share,
		pick: (items) => items[Math.floor(items.length * uniform())]!,
		exponential: (mean) => -mean * Math.log(1 - uniform()),
		logNormal: (median, sigma, low, high) => {
			for (let tries = 0; tries < 50; tries++) {
				const value = median * Math.exp(sigma * normal());
				if (value >= low && value <= high) return value;
			}
			return Math.min(high, Math.max(low, median));
		}
	};
	return self;
}
