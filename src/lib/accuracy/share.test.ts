import { describe, expect, test } from 'vitest';
import { gaussian, seeded } from '$lib/numeric/random';
import { intraclassCorrelation, shareOf, type BayCount } from './share';

const many = (k: number, bay: BayCount): BayCount[] => Array.from({ length: k }, () => bay);

describe('the design effect', () => {
	test('bays that are wholly right or wholly wrong count as one look each', () => {
		const bays = [...many(9, { hits: 5, n: 5 }), { hits: 0, n: 5 }];
		const share = shareOf(bays, 1);
		expect(share.rho).toBeCloseTo(1, 12);
		expect(share.effectiveN).toBeCloseTo(10, 9);
	});

	// Hand, analysis of variance: bays 4/4, 2/4; mean 0.75, between 0.5/1, within 1/6, size 4:
	// rho = (1/2 - 1/6) / (1/2 + 3/6) = 1/3; n_eff = 8 / (1 + 3/3) = 4.
	test('two bays of 4/4 and 2/4 have rho 1/3 and 4 effective looks of 8', () => {
		const share = shareOf(
			[
				{ hits: 4, n: 4 },
				{ hits: 2, n: 4 }
			],
			1
		);
		expect(share.rho).toBeCloseTo(1 / 3, 12);
		expect(share.effectiveN).toBeCloseTo(4, 12);
	});

	test('independent looks have rho near 0', () => {
		const random = seeded(3);
		const bays = Array.from({ length: 300 }, () => {
			const hits = Array.from({ length: 10 }, () => random() < 0.8).filter(Boolean).length;
			return { hits, n: 10 };
		});
		expect(intraclassCorrelation(bays)!).toBeLessThan(0.03);
	});

	test('it cannot be told from one look a bay, or when all are right', () => {
		expect(intraclassCorrelation(many(20, { hits: 1, n: 1 }))).toBeNull();
		expect(intraclassCorrelation(many(20, { hits: 3, n: 3 }))).toBeNull();
		expect(shareOf(many(20, { hits: 3, n: 3 }), 1).effectiveN).toBe(60);
	});
});

describe('a share', () => {
	// Source: check-values.md 7: 80 of 82 has a 95 % interval of 0.9154 to 0.9933 [C].
	test('80 of 82 looks at 82 bays: Wilson 0.9154 to 0.9933', () => {
		const share = shareOf([...many(80, { hits: 1, n: 1 }), ...many(2, { hits: 0, n: 1 })], 1);
		expect(share.share).toBeCloseTo(0.9756, 4);
		expect(share.wilson!.low).toBeCloseTo(0.9154, 4);
		expect(share.wilson!.high).toBeCloseTo(0.9933, 4);
	});

	test('no looks: no share, no limits, never a division by 0', () => {
		expect(shareOf([], 1)).toMatchObject({ share: null, n: 0, wilson: null, bootstrap: null });
	});

	test('both limits hold the true share in about 95 % of surveys of bays that differ', () => {
		const random = seeded(8);
		let byWilson = 0;
		let byBootstrap = 0;
		for (let run = 0; run < 200; run++) {
			const bays = Array.from({ length: 60 }, () => {
				const p = Math.min(1, Math.max(0, 0.8 + 0.15 * gaussian(random)));
				const hits = Array.from({ length: 8 }, () => random() < p).filter(Boolean).length;
				return { hits, n: 8 };
			});
			const share = shareOf(bays, run);
			// Mean of the normal held at 1: 0.8 - 0.15 (φ(4/3) - 4/3 (1 - Φ(4/3))) = 0.7936.
			if (share.wilson!.low <= 0.7936 && 0.7936 <= share.wilson!.high) byWilson++;
			if (share.bootstrap!.low <= 0.7936 && 0.7936 <= share.bootstrap!.high) byBootstrap++;
		}
		expect(byWilson / 200).toBeGreaterThan(0.89);
		expect(byBootstrap / 200).toBeGreaterThan(0.89);
	}, 20_000);
});
