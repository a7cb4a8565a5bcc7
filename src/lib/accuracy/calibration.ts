import { quantile } from '$lib/numeric/quantile';
import type { Limits } from '$lib/numeric/wilson';
import { bootstrapShare, type BayCount } from './share';

/** A state said at some instant with a confidence, and whether it was right. */
export interface Judged {
	/** Bay, or run and bay: what is resampled. */
	cluster: string;
	/** 0 to 1. */
	confidence: number;
	right: boolean;
}

export interface Tenth {
	/** Confidence from here (inclusive) to a tenth more (1 is in the last). */
	from: number;
	n: number;
	meanConfidence: number;
	observed: number;
	/** 95 %, clusters resampled. */
	limits: Limits | null;
	/** Within 0.02, or the mean confidence lies within the limits (method 4). */
	holds: boolean;
}

export interface Calibration {
	n: number;
	tenths: Tenth[];
	/** Mean squared distance of confidence from what came, 0 is best. */
	brier: number;
	/** 1 - brier / brier of always saying the share that was right; positive is better than that. */
	skill: number | null;
	/** Null when nothing was wrong. */
	medianConfidenceOfWrong: number | null;
}

const TOLERANCE = 0.02;

const tenthOf = (confidence: number): number => Math.min(9, Math.floor(confidence * 10 + 1e-9));

function clustersOf(judged: readonly Judged[]): BayCount[] {
	const clusters = new Map<string, BayCount>();
	for (const { cluster, right } of judged) {
		const count = clusters.get(cluster) ?? { hits: 0, n: 0 };
		count.hits += right ? 1 : 0;
		count.n++;
		clusters.set(cluster, count);
	}
	return [...clusters.values()];
}

function tenth(index: number, judged: readonly Judged[], seed: number): Tenth {
	const n = judged.length;
	const meanConfidence = judged.reduce((sum, { confidence }) => sum + confidence, 0) / n;
	const observed = judged.filter(({ right }) => right).length / n;
	const limits = bootstrapShare(clustersOf(judged), seed);
	const inside = limits !== null && limits.low <= meanConfidence && meanConfidence <= limits.high;
	const holds = Math.abs(observed - meanConfidence) <= TOLERANCE || inside;
	return { from: index / 10, n, meanConfidence, observed, limits, holds };
}

/** Reliability table, Brier score and skill of confidences. Null when nothing was judged. */
export function calibration(judged: readonly Judged[], seed: number): Calibration | null {
	const n = judged.length;
	if (n === 0) return null;
	const groups = Array.from({ length: 10 }, (): Judged[] => []);
	for (const one of judged) groups[tenthOf(one.confidence)]?.push(one);
	const brier =
		judged.reduce((sum, { confidence, right }) => sum + (confidence - (right ? 1 : 0)) ** 2, 0) / n;
	const base = judged.filter(({ right }) => right).length / n;
	const wrong = judged.filter(({ right }) => !right).map(({ confidence }) => confidence);
	return {
		n,
		tenths: groups.flatMap((group, i) => (group.length === 0 ? [] : [tenth(i, group, seed)])),
		brier,
		skill: base === 0 || base === 1 ? null : 1 - brier / (base * (1 - base)),
		medianConfidenceOfWrong: wrong.length === 0 ? null : quantile(wrong, 0.5)
	};
}
