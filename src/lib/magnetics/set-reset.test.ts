import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { countsToMg } from './counts';
import { builtInProfile } from './sensor-profile';
import {
	fieldAtReference,
	fieldOf,
	filmLoss,
	offsetAtReference,
	pairField,
	pairOffset,
	rawOf
} from './set-reset';
import { add, scale, type Vec3 } from './vector';

const mg = fc.integer({ min: -8000, max: 8000 });
const vec: fc.Arbitrary<Vec3> = fc.tuple(mg, mg, mg);
const polarity = fc.constantFrom<1 | -1>(1, -1);

describe('a SET/RESET pair', () => {
	// Source: check-values.md 5b, worked vector [C]: S = 140498, R = 124114, 18 bit, 16384 counts/G.
	test('S 140498 and R 124114 are 500 mG and an offset of 75.3173828125 mG', () => {
		const profile = builtInProfile('amr-18-16384')!;
		const set: Vec3 = [140_498 - 131_072, 0, 0];
		const reset: Vec3 = [124_114 - 131_072, 0, 0];
		expect(pairField(set, reset)[0]).toBe(8192);
		expect(pairOffset(set, reset)[0]).toBe(1234);
		expect(countsToMg(pairField(set, reset), profile)[0]).toBe(500);
		expect(countsToMg(pairOffset(set, reset), profile)[0]).toBe(75.3173828125);
	});

	test('a constant on both leaves the field and moves the offset by it', () => {
		fc.assert(
			fc.property(vec, vec, vec, (set, reset, shift) => {
				const moved: [Vec3, Vec3] = [add(set, shift), add(reset, shift)];
				expect(pairField(...moved)).toEqual(pairField(set, reset));
				expect(pairOffset(...moved)).toEqual(add(pairOffset(set, reset), shift));
			})
		);
	});

	test('swapping SET and RESET negates the field and leaves the offset', () => {
		fc.assert(
			fc.property(vec, vec, (set, reset) => {
				const there = pairField(set, reset);
				const back = pairField(reset, set);
				expect(add(there, back)).toEqual([0, 0, 0]);
				expect(pairOffset(reset, set)).toEqual(pairOffset(set, reset));
			})
		);
	});

	test('a field and an offset come back from the pair they make', () => {
		fc.assert(
			fc.property(vec, vec, (field, offset) => {
				const set = rawOf(field, 1, offset);
				const reset = rawOf(field, -1, offset);
				expect(add(pairField(set, reset), [0, 0, 0])).toEqual(field);
				expect(add(pairOffset(set, reset), [0, 0, 0])).toEqual(offset);
			})
		);
	});

	test('V_reset - O is the field negated (check-values 5b)', () => {
		const set: Vec3 = [700, -20, 31];
		const reset: Vec3 = [-100, 40, 7];
		expect(fieldOf(reset, -1, pairOffset(set, reset))).toEqual(pairField(set, reset));
		expect(fieldOf(set, 1, pairOffset(set, reset))).toEqual(pairField(set, reset));
	});
});

describe('readings', () => {
	test('polarity and offset undo each other', () => {
		fc.assert(
			fc.property(vec, vec, polarity, (field, offset, p) => {
				expect(add(fieldOf(rawOf(field, p, offset), p, offset), [0, 0, 0])).toEqual(field);
			})
		);
	});

	test('a film at half gain had lost half the field, whatever the offset', () => {
		const field: Vec3 = [200, 0, -400];
		const offset: Vec3 = [75, -30, 12];
		const before = fieldOf(rawOf(scale(field, 0.5), 1, offset), 1, offset);
		expect(filmLoss(before, field)).toEqual([-100, 0, 200]);
	});
});

describe('temperature', () => {
	test('an offset rising 0.5 mG/°C is 10 mG lower at a reference 20 °C colder', () => {
		expect(offsetAtReference([100, 0, 0], [0.5, 0, 0], 40, 20)).toEqual([90, 0, 0]);
	});

	// Source: check-values.md 5d, drift test anchor [C]: -0.30 %/°C over 40 °C changes 450 mG by 12 % = 54 mG.
	test('450 mG read 40 °C warmer as 396 mG is 450 mG at reference', () => {
		const at = fieldAtReference([396, 0, 0], -0.003, 60, 20);
		expect(at[0]).toBeCloseTo(450, 9);
	});
});
