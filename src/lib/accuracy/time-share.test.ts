import { expect, test } from 'vitest';
import { bayTime, timeShares, type BayTimes } from './time-share';

const BAY: BayTimes = {
	truth: [
		{ atMs: 0, state: 'vacant' },
		{ atMs: 100, state: 'occupied' },
		{ atMs: 300, state: 'vacant' }
	],
	said: [
		{ atMs: 0, state: 'vacant' },
		{ atMs: 110, state: 'occupied' },
		{ atMs: 250, state: 'unknown' },
		{ atMs: 320, state: 'vacant' }
	]
};

// Hand: right 0–100, 110–250, 320–400; wrong 100–110; unknown 250–320.
test('time right, wrong and not known of one bay', () => {
	expect(bayTime(BAY, 0, 400)).toEqual({ rightMs: 320, wrongMs: 10, unknownMs: 70 });
});

test('a window cuts it, and time before the truth is known does not count', () => {
	expect(bayTime(BAY, -50, 105)).toEqual({ rightMs: 100, wrongMs: 5, unknownMs: 0 });
	expect(bayTime(BAY, 400, 400)).toEqual({ rightMs: 0, wrongMs: 0, unknownMs: 0 });
});

test('nothing said is not known', () => {
	expect(bayTime({ truth: BAY.truth, said: [] }, 0, 400)).toEqual({
		rightMs: 0,
		wrongMs: 0,
		unknownMs: 400
	});
});

test('shares are of known time and of all time, with limits over bays', () => {
	const one = { rightMs: 320, wrongMs: 10, unknownMs: 70 };
	const shares = timeShares([one, one, { rightMs: 400, wrongMs: 0, unknownMs: 0 }], 1);
	expect(shares.rightOfKnown).toBeCloseTo(1040 / 1060, 12);
	expect(shares.rightOfAll).toBeCloseTo(1040 / 1200, 12);
	expect(shares.unknown).toBeCloseTo(140 / 1200, 12);
	expect(shares.rightOfAllLimits!.low).toBeLessThan(1040 / 1200);
	expect(shares.bays).toBe(3);
});

test('no time has no share', () => {
	expect(timeShares([], 1)).toMatchObject({ rightOfKnown: null, rightOfAll: null, unknown: null });
});
