import { describe, expect, test } from 'vitest';
import {
	BUILT_IN_PROFILES,
	builtInProfile,
	capacityShare,
	parseProfile,
	PROFILE_RANGES
} from './sensor-profile';

const good = builtInProfile('amr-18-16384')!;

describe('the built-in profiles', () => {
	test('are the four codes of method 1', () => {
		expect(BUILT_IN_PROFILES.map((p) => p.code)).toEqual([
			'amr-18-16384',
			'amr-18-16000',
			'amr-16-4096',
			'amr-16-4000'
		]);
	});

	// Source: check-values.md 5a: null 131072 [V], 16-bit 32768 [M for the mode].
	test('have the null field in the middle of the converter', () => {
		expect(BUILT_IN_PROFILES.map((p) => p.nullCount)).toEqual([131_072, 131_072, 32_768, 32_768]);
	});

	test.each(BUILT_IN_PROFILES)('$code passes its own check, also after JSON', (profile) => {
		const again = JSON.parse(JSON.stringify(profile)) as unknown;
		expect(parseProfile(again)).toEqual({ ok: true, profile });
	});

	test('an unknown code is null', () => {
		expect(builtInProfile('other')).toBeNull();
	});
});

describe('a profile from outside', () => {
	test.each(Object.entries(PROFILE_RANGES))('%s beyond its range is named', (field, range) => {
		for (const value of [range.min - 1, range.max * 2 + 1, Number.NaN, '1', null, undefined]) {
			const parsed = parseProfile({ ...good, [field]: value });
			expect(parsed.ok ? [] : parsed.problems.map((p) => p.field)).toContain(field);
		}
	});

	test.each([
		['code', 'Ä'],
		['code', ''],
		['name', '  '],
		['bits', 17.5],
		['nullCount', 2 ** 18],
		['capacityByTemp', []],
		['capacityByTemp', [{ tempC: 20 }]],
		['capacityByTemp', [null]],
		[
			'capacityByTemp',
			[
				{ tempC: 20, share: 1 },
				{ tempC: 0, share: 0.9 }
			]
		],
		['rangeMg', 20_000]
	])('%s of %j is refused', (field, value) => {
		const parsed = parseProfile({ ...good, [field]: value });
		expect(parsed.ok ? [] : parsed.problems.map((p) => p.field)).toContain(field);
	});

	test.each([null, 3, 'x', [], {}])('%j is refused, not thrown', (value) => {
		expect(parseProfile(value).ok).toBe(false);
	});

	test('what the table does not name is left behind', () => {
		const parsed = parseProfile({ ...good, extra: 1 });
		expect(parsed).toEqual({ ok: true, profile: good });
	});
});

describe('capacity by temperature', () => {
	test.each([
		[-60, 0.45],
		[-40, 0.45],
		[-30, 0.575],
		[20, 1],
		[40, 0.96],
		[80, 0.92]
	])('at %f °C it is %f, straight between the points and level beyond them', (tempC, share) => {
		expect(capacityShare(good, tempC)).toBeCloseTo(share, 12);
	});
});
