import type { ProofRow } from './proof';

const LEAST_MG = 4;
const SIGMAS = 4;

/**
 * Rows that lie within 4 sigma of the two before them (method 3, 'still'), after polarity; `sigmaMg` is the
 * node's noise. The first two of a run have nothing to be held against and do not count.
 */
export function stillRows(rows: readonly ProofRow[], sigmaMg: number): ProofRow[] {
	const reachMg = Math.max(LEAST_MG, SIGMAS * Math.SQRT2 * sigmaMg);
	return rows.filter((row, i) => {
		const [one, two] = [rows[i - 2], rows[i - 1]];
		if (one === undefined || two === undefined) return false;
		return ([0, 1, 2] as const).every((axis) => {
			const values = [one, two, row].map((r) => r.polarity * r.rawMg[axis]);
			return Math.max(...values) - Math.min(...values) <= reachMg;
		});
	});
}
