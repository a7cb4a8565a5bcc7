import { describe, expect, test } from 'vitest';
import { accuracyReport, confusionTable, type Look } from './confusion';

let spell = 0;
function looks(
	n: number,
	truth: Look['truth'],
	said: Look['said'],
	more: Partial<Look> = {}
): Look[] {
	return Array.from({ length: n }, (_, i) => ({
		bay: `B${i % 10}`,
		truth,
		said,
		spell: `s${spell++}`,
		nearChange: false,
		cause: null,
		...more
	}));
}

// Source: check-values.md 10: TP 50, TN 40, FP 5, FN 5 has a Matthews correlation of 0.79798.
const CHECKED = [
	...looks(50, 'occupied', 'occupied'),
	...looks(40, 'vacant', 'vacant'),
	...looks(5, 'vacant', 'occupied', { cause: 'echo' }),
	...looks(5, 'occupied', 'vacant')
];

describe('the report of a survey', () => {
	test('its table, shares and Matthews correlation', () => {
		const { unknownLeftOut } = accuracyReport(CHECKED, 1);
		expect(unknownLeftOut.table).toEqual({
			truePositive: 50,
			trueNegative: 40,
			falsePositive: 5,
			falseNegative: 5
		});
		expect(unknownLeftOut.matthews).toBeCloseTo(0.79798, 5);
		expect(unknownLeftOut.sensitivity).toMatchObject({ hits: 50, n: 55 });
		expect(unknownLeftOut.specificity).toMatchObject({ hits: 40, n: 45 });
		expect(unknownLeftOut.positivePredictive).toMatchObject({ hits: 50, n: 55 });
		expect(unknownLeftOut.negativePredictive).toMatchObject({ hits: 40, n: 45 });
		expect(unknownLeftOut.right.share).toBeCloseTo(0.9, 12);
	});

	test('misses and false calls by bay, and by cause with what is not known', () => {
		const report = accuracyReport(CHECKED, 1);
		expect(report.missesByBay.reduce((sum, { n }) => sum + n, 0)).toBe(5);
		expect(report.falseCallsByBay.reduce((sum, { n }) => sum + n, 0)).toBe(5);
		expect(report.byCause).toEqual([
			{ name: 'echo', n: 5 },
			{ name: 'not known', n: 5 }
		]);
	});

	test('unknown is counted twice over: left out, and as wrong', () => {
		const report = accuracyReport([...CHECKED, ...looks(10, 'occupied', 'unknown')], 1);
		expect(report.unknown).toEqual({ n: 10, ofOccupied: 10, ofVacant: 0 });
		expect(report.unknownLeftOut.right).toMatchObject({ hits: 90, n: 100 });
		expect(report.unknownAsWrong.right).toMatchObject({ hits: 90, n: 110 });
		expect(report.unknownAsWrong.sensitivity).toMatchObject({ hits: 50, n: 65 });
	});

	test('a stay looked at twice counts once', () => {
		const twice = looks(2, 'occupied', 'occupied', { bay: 'B1', spell: 'one' });
		const report = accuracyReport([...CHECKED, ...twice], 1);
		expect(report.repeated).toBe(1);
		expect(report.counted).toBe(101);
	});

	test('looks within 60 s of a change stand apart', () => {
		const report = accuracyReport(
			[...CHECKED, ...looks(3, 'occupied', 'vacant', { nearChange: true })],
			1
		);
		expect(report.nearChange).toEqual({ n: 3, right: 0 });
		expect(report.unknownLeftOut.right).toMatchObject({ hits: 90, n: 100 });
	});

	test('no looks give shares of null, not of 0', () => {
		const report = accuracyReport([], 1);
		expect(report.unknownLeftOut.right.share).toBeNull();
		expect(confusionTable([]).truePositive).toBe(0);
	});

	test('the same looks and seed give the same report', () => {
		expect(accuracyReport(CHECKED, 5)).toEqual(accuracyReport(CHECKED, 5));
	});
});
