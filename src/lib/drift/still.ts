import { differenceSigma } from '$lib/numeric/mad';
import type { Vec3 } from '$lib/magnetics/vector';

export interface FieldRow {
	atMs: number;
	fieldMg: Vec3;
}

/** Readings that agree within this are still, however quiet the sensor (method 3: 4 sigma of each other). */
const SIGMAS = 4;
const LEAST_MG = 2;
const MOST_MG = 10;
/** The last three readings agree. */
const READINGS = 3;

/** Noise of the worst axis (method 3). */
function noiseMg(rows: readonly FieldRow[]): number {
	const axis = (i: 0 | 1 | 2) => differenceSigma(rows.map((row) => row.fieldMg[i])) ?? 0;
	return Math.max(axis(0), axis(1), axis(2));
}

/**
 * Rows of one level that stand still: each agrees with the two before it within 4 sigma an axis. Rows in
 * order of time; the first two of the stretch count once a third agrees with them.
 */
export function stillRows<T extends FieldRow>(rows: readonly T[]): T[] {
	const boxMg = Math.min(MOST_MG, Math.max(LEAST_MG, SIGMAS * Math.SQRT2 * noiseMg(rows)));
	const still = new Set<T>();
	for (let i = READINGS - 1; i < rows.length; i++) {
		const three = rows.slice(i - READINGS + 1, i + 1);
		const spread = (axis: 0 | 1 | 2) => {
			const values = three.map((row) => row.fieldMg[axis]);
			return Math.max(...values) - Math.min(...values);
		};
		if (Math.max(spread(0), spread(1), spread(2)) <= boxMg) for (const row of three) still.add(row);
	}
	return [...still];
}
