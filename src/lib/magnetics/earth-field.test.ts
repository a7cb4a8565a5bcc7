import { describe, expect, test } from 'vitest';
import { checkAgainstEarth, decimalYear, earthField } from './earth-field';

// Source: NOAA NCEI and BGS, WMM2025 technical report, 12 test positions (check-values.md 1a).
// year | h km | lat | lon | X | Y | Z | H | F | I | D
const REPORT = `
2025.0 0 80 0 6521.6 145.9 54791.5 6523.2 55178.5 83.2106 1.2815
2025.0 0 0 120 39677.8 -109.6 -10580.2 39677.9 41064.3 -14.9306 -0.1583
2025.0 0 -80 240 6117.5 15751.9 -52022.5 16898.1 54698.2 -72.0050 68.7754
2025.0 100 80 0 6216.0 92.4 52598.8 6216.7 52964.9 83.2594 0.8520
2025.0 100 0 120 37688.6 -96.2 -10152.1 37688.7 39032.1 -15.0757 -0.1463
2025.0 100 -80 240 5907.6 14780.3 -49540.7 15917.1 52035.0 -72.1881 68.2137
2027.5 0 80 0 6500.8 294.5 54869.4 6507.5 55253.9 83.2363 2.5941
2027.5 0 0 120 39701.6 -167.4 -10381.8 39702.0 41036.9 -14.6543 -0.2415
2027.5 0 -80 240 6200.7 15730.3 -51783.7 16908.3 54474.2 -71.9172 68.4861
2027.5 100 80 0 6196.7 233.8 52670.5 6201.1 53034.3 83.2852 2.1605
2027.5 100 0 120 37711.5 -148.7 -9969.8 37711.8 39007.4 -14.8084 -0.2259
2027.5 100 -80 240 5984.0 14760.1 -49317.7 15927.0 51825.7 -72.1023 67.9316`;

// Source: WMM2025_TEST_VALUES.txt, 18 of 100 official rows, full precision (check-values.md 1b).
const OFFICIAL = `
2025.0 65 43 93 24299.852822 210.517066 50037.923998 24300.764692 55626.621348 64.10 0.50
2025.0 51 -33 109 21737.778822 -2090.274098 -52710.003920 21838.046477 57054.752538 -67.50 -5.49
2025.0 66 14 143 35003.441364 -116.624818 7966.315182 35003.635649 35898.700342 12.82 -0.19
2025.0 18 0 21 29274.811882 659.800118 -14316.722540 29282.246275 32594.761714 -26.06 1.29
2025.5 63 26 81 34802.613433 308.431881 30332.056989 34803.980117 46166.554053 41.07 0.51
2025.5 22 -37 140 21404.761773 3498.897430 -55397.587760 21688.847590 59492.006517 -68.62 9.28
2025.5 44 33 -118 23235.835850 4558.379362 37727.715752 23678.743422 44542.826874 57.89 11.10
2026.0 69 23 63 34558.605297 708.078839 25043.405885 34565.858527 42684.549360 35.92 1.17
2026.0 62 -14 99 33437.828630 -835.919473 -33100.922253 33448.275663 47058.030120 -44.70 -1.43
2026.5 64 10 78 39427.724480 -1049.971869 5214.811025 39441.702532 39784.948821 7.53 -1.53
2026.5 19 29 66 32725.000691 1278.343380 33958.454002 32749.959268 47177.711160 46.04 2.24
2027.0 61 59 -77 10437.775689 -3087.391846 54397.713552 10884.812802 55476.034370 78.68 -16.48
2027.5 8 62 53 12260.425578 4315.497527 54849.810218 12997.751893 56368.814385 76.67 19.39
2027.5 0 -13 -59 21365.849306 -6732.560620 -6112.313520 22401.493010 23220.406233 -15.26 -17.49
2028.5 11 34 0 29078.234597 798.434048 30945.577813 29089.194286 42471.284539 46.77 1.57
2029.0 58 32 19 29359.395781 2108.188210 30508.465542 29434.989012 42393.219362 46.03 4.11
2029.0 57 34 -13 28241.863242 -933.225495 28997.458189 28257.277809 40488.595068 45.74 -1.89
2029.0 19 46 -22 22522.142232 -2227.393290 40651.688191 22632.016516 46527.066578 60.89 -5.65`;

type Row = [year: number, km: number, lat: number, lon: number, ...figures: number[]];
const rows = (text: string): Row[] =>
	text
		.trim()
		.split('\n')
		.map((line) => line.split(' ').map(Number) as Row);

function expectRow(
	[year, km, lat, lon, ...figures]: Row,
	toleranceNt: number,
	toleranceDeg: number
) {
	const found = earthField(lat, lon, km, year);
	const fields = [found.xMg, found.yMg, found.zMg, found.horizontalMg, found.totalMg];
	for (const [i, mg] of fields.entries())
		expect(Math.abs(mg * 100 - figures[i]!)).toBeLessThanOrEqual(toleranceNt);
	const angles = [found.inclinationDeg, found.declinationDeg];
	for (const [i, deg] of angles.entries())
		expect(Math.abs(deg - figures[5 + i]!)).toBeLessThanOrEqual(toleranceDeg);
	expect(found.withinModelYears).toBe(true);
}

describe('WMM2025', () => {
	test.each(rows(REPORT))('the report, %f, %i km, %i N %i E', (...row) => {
		expectRow(row, 0.0501, 0.000051);
	});

	// check-values 1c: the package itself reproduces the official rows to 0.0007 nT.
	test.each(rows(OFFICIAL))('an official row, %f, %i km, %i N %i E', (...row) => {
		expectRow(row, 0.001, 0.00501);
	});

	// Source: pygeomag README (check-values.md 1b).
	test('47.6205 N 122.3493 W at 2025.25 declines 15.0656296° east', () => {
		expect(earthField(47.6205, -122.3493, 0, 2025.25).declinationDeg).toBeCloseTo(15.0656296, 5);
	});

	test('33 N 118 W at 2025.5 is 445.43 mG in all and 236.79 mG horizontal', () => {
		const found = earthField(33, -118, 44, 2025.5);
		expect(found.totalMg).toBeCloseTo(445.4283, 4);
		expect(found.horizontalMg).toBeCloseTo(236.7874, 4);
		expect(found.zMg).toBeCloseTo(377.2772, 4);
	});

	test('December 2029, where the package itself refuses, lies on the straight line of the model', () => {
		const year = decimalYear(Date.UTC(2029, 11, 15));
		const there = earthField(46, -22, 19, year);
		const before = earthField(46, -22, 19, 2029);
		const mid = earthField(46, -22, 19, 2029.5);
		const share = (year - 2029) / 0.5;
		expect(there.withinModelYears).toBe(true);
		expect(there.xMg).toBeCloseTo(before.xMg + share * (mid.xMg - before.xMg), 8);
	});

	test('after 2030.0 the line is carried on and says so', () => {
		expect(earthField(46, -22, 19, 2030).withinModelYears).toBe(true);
		expect(earthField(46, -22, 19, 2030.01).withinModelYears).toBe(false);
		expect(earthField(46, -22, 19, 2024.9).withinModelYears).toBe(false);
	});
});

describe('decimal years', () => {
	test.each([
		[Date.UTC(2025, 0), 2025],
		[Date.UTC(2027, 6, 2, 12), 2027.5],
		[Date.UTC(2028, 6, 2), 2028.5],
		[Date.UTC(2028, 11, 31), 2028 + 365 / 366],
		[Date.UTC(2029, 0), 2029]
	])('%i is %f', (atMs, year) => {
		expect(decimalYear(atMs)).toBeCloseTo(year, 12);
	});
});

// Source: method.md 8.
describe('the check against the Earth', () => {
	test.each([
		[450, 450, 'agrees'],
		[600, 450, 'agrees'],
		[310, 450, 'agrees'],
		[620, 450, 'off'],
		[280, 450, 'off'],
		[1800, 450, 'wrong_resolution'],
		[112, 450, 'wrong_resolution'],
		[30, 450, 'off']
	])('%i mG against %i mG: %s', (quietMg, earthMg, verdict) => {
		expect(checkAgainstEarth(quietMg, earthMg).verdict).toBe(verdict);
	});
});
