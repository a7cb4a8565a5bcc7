/**
 * Lower limits of the K index for an observatory whose K = 9 begins at 500 nT, in mG of 3-hour range of the
 * more disturbed horizontal component. Fractions of the K = 9 limit: Lockwood et al., J. Space Weather Space
 * Clim. 2019, Table 1 (check-values 8a); 500 nT: Niemegk. 1 mG = 100 nT.
 */
const K9_MG = 5;
const FRACTIONS = [0, 0.01, 0.02, 0.04, 0.08, 0.14, 0.24, 0.4, 0.66, 1];

export const K_LOWER_LIMITS_MG: readonly number[] = FRACTIONS.map((share) => share * K9_MG);

/** K index 0 … 9 of a 3-hour range; a lower limit belongs to its class. */
export function kIndex(rangeMg: number): number {
	let k = 0;
	for (const [index, limit] of K_LOWER_LIMITS_MG.entries()) if (rangeMg >= limit - 1e-9) k = index;
	return k;
}
