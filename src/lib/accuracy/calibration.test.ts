import { describe, expect, test } from 'vitest';
import { seeded } from '$lib/numeric/random';
import { calibration, type Judged } from './calibration';

/** Confidences spread over 0.5 to 1; `truth` says how often one of confidence c is right. */
function judged(n: number, truth: (c: number) => number, seed: number): Judged[] {
	const random = seeded(seed);
	return Array.from({ length: n }, (_, i) => {
		const confidence = 0.5 + random() / 2;
		return { cluster: `bay ${i % 50}`, confidence, right: random() < truth(confidence) };
	});
}

describe('calibration', () => {
	test('confidences that are the true chances hold in every tenth, with positive skill', () => {
		const found = calibration(
			judged(20_000, (c) => c, 4),
			1
		)!;
		expect(found.tenths.every((tenth) => tenth.holds)).toBe(true);
		expect(found.skill!).toBeGreaterThan(0);
	});

	test('confidences that boast do not hold', () => {
		const found = calibration(
			judged(20_000, (c) => c - 0.15, 4),
			1
		)!;
		expect(found.tenths.some((tenth) => tenth.holds)).toBe(false);
	});

	// Hand: (0.1² + 0.1² + 0.8²) / 3 = 0.22; base 2/3, skill 1 - 0.22 / (2/9) = 0.01.
	test('the Brier score and its skill of three judgements', () => {
		const found = calibration(
			[
				{ cluster: 'a', confidence: 0.9, right: true },
				{ cluster: 'b', confidence: 0.9, right: true },
				{ cluster: 'c', confidence: 0.8, right: false }
			],
			1
		)!;
		expect(found.brier).toBeCloseTo(0.22, 12);
		expect(found.skill).toBeCloseTo(0.01, 12);
		expect(found.medianConfidenceOfWrong).toBe(0.8);
	});

	test('a confidence of 1 is in the last tenth, one of 0.7 begins its own', () => {
		const one = (confidence: number) => [{ cluster: 'a', confidence, right: true }];
		expect(calibration(one(1), 1)!.tenths[0]!.from).toBe(0.9);
		expect(calibration(one(0.7), 1)!.tenths[0]!.from).toBe(0.7);
	});

	test('nothing judged is null', () => {
		expect(calibration([], 1)).toBeNull();
	});
});
