import { expect, test } from 'vitest';
import { fieldSeries, spacingOf, type ReadingItem } from './field-curves';

const item = (atS: number, mean: [number, number, number], n = 1): ReadingItem => ({
	at: new Date(atS * 1000).toISOString(),
	n,
	min: mean,
	max: mean,
	mean,
	tempC: 0
});

test('field is reading less offset; disturbance is the distance from the baseline', () => {
	// By hand: r = (310, 0, 410), O = (10, 0, 10) → B = (300, 0, 400), |B| = 500; b = (300, 0, 396) → d = 4.
	const series = fieldSeries([item(0, [310, 0, 410])], [10, 0, 10], [300, 0, 396], 60);
	expect(series.axes.map((axis) => axis.mean[0])).toEqual([300, 0, 400]);
	expect([series.magnitudeMg[0], series.disturbanceMg[0]]).toEqual([500, 4]);
});
test('a gap of more than 3 spacings is drawn as a gap, and 0 °C is a reading', () => {
	const series = fieldSeries(
		[item(0, [1, 1, 1]), item(60, [1, 1, 1]), item(600, [1, 1, 1])],
		null,
		null,
		60
	);
	expect(series.timesS).toEqual([0, 60, 120, 600]);
	expect(series.magnitudeMg[2]).toBeNull();
	expect(series.tempC).toEqual([0, 0, null, 0]);
});
test('without a baseline there is no disturbance, never a guess', () => {
	expect(fieldSeries([item(0, [1, 1, 1])], null, null, 60).disturbanceMg).toEqual([null]);
});
test('buckets are as wide as they say, single readings as far apart as the node reports', () => {
	expect(spacingOf([item(0, [1, 1, 1], 5)], 300_000, 60)).toBe(300);
	expect(spacingOf([item(0, [1, 1, 1])], null, 60)).toBe(60);
});
