import { describe, expect, test } from 'vitest';
import { axisMg, countsToMg, isClipped, mgToCounts, signedCounts, signedRange } from './counts';
import { BUILT_IN_PROFILES, builtInProfile } from './sensor-profile';

const bits18 = builtInProfile('amr-18-16384')!;
const rounded18 = builtInProfile('amr-18-16000')!;
const bits16 = builtInProfile('amr-16-4096')!;
const rounded16 = builtInProfile('amr-16-4000')!;

// Source: check-values.md 5a, conversion vectors [C]; null field and counts per gauss [V].
const VECTORS_18: [number, number, number][] = [
	[0, -8000, -8192],
	[1, -7999.93896484, -8191.9375],
	[122_880, -500, -512],
	[131_071, -0.06103516, -0.0625],
	[131_072, 0, 0],
	[131_073, 0.06103516, 0.0625],
	[139_264, 500, 512],
	[147_456, 1000, 1024],
	[262_143, 7999.93896484, 8191.9375]
];
const VECTORS_16: [number, number][] = [
	[0, -8000],
	[32_768, 0],
	[32_769, 0.24414062],
	[34_816, 500],
	[36_864, 1000],
	[65_535, 7999.75585938]
];

describe('counts to field', () => {
	test.each(VECTORS_18)('18 bit, %i is %f mG exact and %f mG rounded', (u, exactMg, roundedMg) => {
		expect(axisMg(signedCounts(u, bits18), bits18)).toBeCloseTo(exactMg, 7);
		expect(axisMg(signedCounts(u, rounded18), rounded18)).toBeCloseTo(roundedMg, 7);
	});

	test.each(VECTORS_16)('16 bit, %i is %f mG', (u, mg) => {
		expect(axisMg(signedCounts(u, bits16), bits16)).toBeCloseTo(mg, 7);
	});

	test('the two scales of one part differ by exactly 1.024', () => {
		expect(axisMg(1, rounded18) / axisMg(1, bits18)).toBe(1.024);
		expect(axisMg(1, rounded16) / axisMg(1, bits16)).toBe(1.024);
		expect(axisMg(1, rounded16)).toBe(0.25);
	});

	test('a reading of 0 counts is 0 mG and is kept', () => {
		expect(countsToMg([0, 0, 0], bits18)).toEqual([0, 0, 0]);
	});

	test.each(BUILT_IN_PROFILES)('$code: field to counts and back stays within half a count', (p) => {
		const fieldMg = [123.4, -456.7, 789.1] as const;
		const back = countsToMg(mgToCounts(fieldMg, p), p);
		for (const [i, mg] of fieldMg.entries())
			expect(Math.abs(back[i]! - mg)).toBeLessThanOrEqual(axisMg(0.5, p) + 1e-9);
	});

	test('a field beyond the range is held at its ends', () => {
		expect(mgToCounts([1e6, -1e6, 0], bits18)).toEqual([131_071, -131_072, 0]);
	});
});

describe('clipping', () => {
	test('signed counts span the converter', () => {
		expect(signedRange(bits18)).toEqual({ min: -131_072, max: 131_071 });
		expect(signedRange(bits16)).toEqual({ min: -32_768, max: 32_767 });
	});

	// Source: method.md 1, 'within 8 of either end'.
	test.each([
		[131_071, true],
		[131_063, true],
		[131_062, false],
		[-131_072, true],
		[-131_064, true],
		[-131_063, false],
		[0, false]
	])('a count of %i: %s', (count, clipped) => {
		expect(isClipped([0, count, 0], bits18)).toBe(clipped);
	});
});
