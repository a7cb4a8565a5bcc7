import { expect, test } from 'vitest';
import { K_LOWER_LIMITS_MG } from '$lib/drift/k-scale';
import { lineCurves, rangeCurve, shownLimits } from './site-line-curves';

const at = (h: number) => new Date(h * 3_600_000).toISOString();
const point = (h: number, changeMg: [number, number, number] | null) => ({
	...{ at: at(h), verdict: 'known' as const, changeMg, spreadMg: 1, nodes: 8 }
});

test('an hour that was not closed, and one whose change is not known, are gaps', () => {
	const curves = lineCurves([point(0, [1, 2, 3]), point(1, null), point(5, [4, 5, 6])]);
	expect(curves.timesS).toEqual([0, 3600, 7200, 18_000]);
	expect(curves.h).toEqual([1, null, null, 4]);
});

test('a range stands over its three hours, and a missing one is a gap', () => {
	const curve = rangeCurve([
		{ from: at(0), to: at(3), rangeMg: 0.5, k: 4 },
		{ from: at(6), to: at(9), rangeMg: 1, k: 5 }
	]);
	expect(curve.rangeMg).toEqual([0.5, 0.5, null, 1, 1]);
});

test('limits of the K scale are shown up to the first that was not reached, no two on each other', () => {
	// Check-values 8a for K 9 = 500 nT: K 3 from 0.2, K 4 0.4, K 5 0.7, K 6 1.2 mG; K 2 (0.1) and K 1 (0.05) are too near K 3.
	const shown = shownLimits(K_LOWER_LIMITS_MG, [0.3, 0.9]);
	expect(shown.map(({ k }) => k)).toEqual([3, 4, 5, 6]);
	expect(shown.at(-1)?.limitMg).toBeCloseTo(1.2, 9);
});
