import { expect, test } from 'vitest';
import {
	kaplanMeier,
	restrictedMean,
	survivalAt,
	timeByShare,
	type Duration
} from './kaplan-meier';

// Data: weeks of remission of the treated group, Freireich et al. 1963, as textbooks print them [M];
// a plus sign is a censored one. Answers by the product-limit arithmetic, by hand:
// 18/21, then x 16/17, 14/15, 11/12, 10/11, 6/7, 5/6.
const REMISSION = '6 6 6 6+ 7 9+ 10 10+ 11+ 13 16 17+ 19+ 20+ 22 23 25+ 32+ 32+ 34+ 35+'
	.split(' ')
	.map((text): Duration => ({ time: parseInt(text, 10), ended: !text.endsWith('+') }));

test('a censored series, step by step', () => {
	const steps = kaplanMeier(REMISSION);
	expect(steps.map((s) => [s.time, s.atRisk, s.ended])).toEqual([
		[6, 21, 3],
		[7, 17, 1],
		[10, 15, 1],
		[13, 12, 1],
		[16, 11, 1],
		[22, 7, 1],
		[23, 6, 1]
	]);
	const expected = [0.8571, 0.8067, 0.7529, 0.6902, 0.6275, 0.5378, 0.4482];
	for (const [i, share] of expected.entries()) expect(steps[i]!.survival).toBeCloseTo(share, 4);
	// Greenwood by hand for the first: 0.857 sqrt(3 / (21·18)).
	expect(steps[0]!.standardError).toBeCloseTo(0.0764, 4);
});

test('the median is the first time by which half have ended', () => {
	const steps = kaplanMeier(REMISSION);
	expect(timeByShare(steps, 0.5)).toBe(23);
	expect(timeByShare(steps, 0.9)).toBeNull();
});

test('without censoring the curve is the share still lasting, and its area the mean', () => {
	const steps = kaplanMeier([1, 2, 3, 4].map((time) => ({ time, ended: true })));
	expect(steps.map((s) => s.survival)).toEqual([0.75, 0.5, 0.25, 0]);
	expect(restrictedMean(steps, 10)).toBeCloseTo(2.5, 12);
	expect(survivalAt(steps, 2.5)).toBe(0.5);
	expect(survivalAt(steps, 0)).toBe(1);
});

test('running stays left out would bias the mean down; counted as censored they do not', () => {
	const all = [1, 1, 1, 9].map((time) => ({ time, ended: time < 5 }));
	expect(restrictedMean(kaplanMeier(all), 9)).toBeCloseTo(0.25 * 8 + 1, 12);
});

test('nothing gives no steps', () => {
	expect(kaplanMeier([])).toEqual([]);
	expect(timeByShare([], 0.5)).toBeNull();
});
