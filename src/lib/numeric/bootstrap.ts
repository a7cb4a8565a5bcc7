import { quantile } from './quantile';
import { seeded } from './random';
import type { Limits } from './wilson';

export interface BootstrapOptions {
	seed: number;
	rounds?: number;
	level?: number;
}

/**
 * Percentile limits of a statistic, resampling whole clusters (bays), since looks at one bay go together.
 * The statistic may be null for a resample without data; those are left out. Null under 2 clusters.
 */
export function bootstrapClusters<T>(
	clusters: readonly T[],
	statistic: (sample: readonly T[]) => number | null,
	{ seed, rounds = 1000, level = 0.95 }: BootstrapOptions
): Limits | null {
	if (clusters.length < 2) return null;
	const random = seeded(seed);
	const found: number[] = [];
	for (let round = 0; round < rounds; round++) {
		const sample = clusters.map(() => clusters[Math.floor(random() * clusters.length)] as T);
		const value = statistic(sample);
		if (value !== null) found.push(value);
	}
	if (found.length === 0) return null;
	return { low: quantile(found, (1 - level) / 2), high: quantile(found, (1 + level) / 2) };
}
