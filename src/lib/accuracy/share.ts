import { seeded } from '$lib/numeric/random';
import { quantile } from '$lib/numeric/quantile';
import { wilson, type Limits } from '$lib/numeric/wilson';

/** Hits of n at one bay. Looks at one bay go together, so bays are what is resampled. */
export interface BayCount {
	hits: number;
	n: number;
}

/** A share with everything that must stand beside it: no percentage without its n (method 9). */
export interface Share {
	hits: number;
	n: number;
	/** Null where n is 0. */
	share: number | null;
	bays: number;
	/** How alike looks at one bay are, 0 to 1; null where the data cannot tell. */
	rho: number | null;
	/** n / (1 + (m - 1) rho): as many independent looks would say as much. */
	effectiveN: number;
	/** Wilson 95 % on the effective number. */
	wilson: Limits | null;
	/** 95 % by resampling bays. */
	bootstrap: Limits | null;
}

const ROUNDS = 1000;

function totals(bays: readonly BayCount[]): BayCount {
	let hits = 0;
	let n = 0;
	for (const bay of bays) {
		hits += bay.hits;
		n += bay.n;
	}
	return { hits, n };
}

/**
 * Intraclass correlation of right and wrong within bays, by analysis of variance with unequal numbers
 * (Donner and Koval 1980 [M]); null where it cannot be told: under 2 bays, one look each, or all alike.
 */
export function intraclassCorrelation(bays: readonly BayCount[]): number | null {
	const looked = bays.filter((bay) => bay.n > 0);
	const { hits, n } = totals(looked);
	const k = looked.length;
	if (k < 2 || n <= k || hits === 0 || hits === n) return null;
	const mean = hits / n;
	let between = 0;
	let within = 0;
	let squares = 0;
	for (const bay of looked) {
		const share = bay.hits / bay.n;
		between += bay.n * (share - mean) ** 2;
		within += bay.n * share * (1 - share);
		squares += bay.n ** 2;
	}
	const msBetween = between / (k - 1);
	const msWithin = within / (n - k);
	const size = (n - squares / n) / (k - 1);
	const rho = (msBetween - msWithin) / (msBetween + (size - 1) * msWithin);
	return Math.min(1, Math.max(0, rho));
}

/** m of the design effect for unequal numbers: Σ m² / Σ m, which is m where all are equal. */
function looksABay(bays: readonly BayCount[], n: number): number {
	return bays.reduce((sum, bay) => sum + bay.n ** 2, 0) / n;
}

/** Percentile limits of Σ hits / Σ n, whole bays resampled. */
export function bootstrapShare(bays: readonly BayCount[], seed: number): Limits | null {
	const looked = bays.filter((bay) => bay.n > 0);
	if (looked.length < 2) return null;
	const random = seeded(seed);
	const shares: number[] = [];
	for (let round = 0; round < ROUNDS; round++) {
		let hits = 0;
		let n = 0;
		for (let i = 0; i < looked.length; i++) {
			const bay = looked[Math.floor(random() * looked.length)] as BayCount;
			hits += bay.hits;
			n += bay.n;
		}
		shares.push(hits / n);
	}
	return { low: quantile(shares, 0.025), high: quantile(shares, 0.975) };
}

/** A share with both limits of method 9. Counts by bay; the seed fixes the resampling. */
export function shareOf(bays: readonly BayCount[], seed: number): Share {
	const { hits, n } = totals(bays);
	const rho = intraclassCorrelation(bays);
	const effectiveN = n === 0 ? 0 : n / (1 + (looksABay(bays, n) - 1) * (rho ?? 0));
	return {
		hits,
		n,
		share: n === 0 ? null : hits / n,
		bays: bays.filter((bay) => bay.n > 0).length,
		rho,
		effectiveN,
		wilson: n === 0 ? null : wilson((hits / n) * effectiveN, effectiveN),
		bootstrap: bootstrapShare(bays, seed)
	};
}
