import { expect, test } from 'vitest';
import type { DriftRow } from '$lib/schemas/desk-drift';
import { daysTo, driftFactsOf } from './drift-facts';

const DAY = 86_400_000;
const LIMITS = { driftingMg: 12, refreshMg: 20, statesMg: 40 };
/** 1 mG a day more for ten days, hourly; ends at 20 mG. */
const hours = Array.from({ length: 240 }, (_, h) => ({
	...{ atMs: (h * DAY) / 24, valueMg: 10 + Math.floor(h / 24) + 1 }
}));
const parts = { total: 0, temperature: 0, geomagnetic: 0, bridge: 0, film: 0, surroundings: 0 };
const row: DriftRow = {
	...{ serial: 'N-1', bay: 'B07', zone: 'N', condition: 'refresh_due', also: [], hour: null },
	...{ partsMg: { ...parts, unexplained: 20.4 }, sureMg: 19, vectors: null },
	cause: { cause: 'tilt', magnitudeMg: 31.6, says: '', ordinary: false },
	...{ next: '', notes: [], drifting: null, visit: [], ratePerDayMg: 1.04, trend: true },
	refresh: {
		due: true,
		reasons: [{ reason: 'unexplained', since: '2026-12-01T00:00:00Z', says: '' }]
	},
	...{ daysToLimit: null, arrow: null, lastPairAt: null }
};

test('the named cause, the rate and the limits of the node itself are told', () => {
	expect(driftFactsOf(row, LIMITS, [])).toEqual({
		...{ unexplainedMg: 20, limitsMg: [12, 20], cause: 'tilt', causeMg: 32 },
		...{ reasons: ['unexplained'], rateMgPerDay: 1 }
	});
});

test('what is always taken out is no cause, and chance is no rate', () => {
	const cause = { ...row.cause!, cause: 'temperature' as const, ordinary: true };
	const facts = driftFactsOf({ ...row, cause, trend: false }, LIMITS, []);
	expect(facts).not.toHaveProperty('cause');
	expect(facts).not.toHaveProperty('rateMgPerDay');
});

test('days left are the board’s, and past its last limit those until a free bay reads as taken', () => {
	const ahead = { limitMg: 20, from: 2.4, to: 6.1 };
	expect(driftFactsOf({ ...row, daysToLimit: ahead }, LIMITS, hours)).toMatchObject({
		...{ daysLeftLo: 2, daysLeftHi: 7 }
	});
	// By hand: 20 mG missing to 40 mG at exactly 1 mG a day.
	expect(driftFactsOf(row, LIMITS, hours)).toMatchObject({ daysLeftLo: 20, daysLeftHi: 20 });
});

test('a site’s own threshold of occupancy moves the days left', () => {
	expect(daysTo(30, hours)).toEqual({ daysLeftLo: 10, daysLeftHi: 10 });
});

test('under five days of hours, or without growth, nothing is foretold', () => {
	expect(daysTo(40, hours.slice(0, 96))).toEqual({});
	expect(
		daysTo(
			40,
			hours.map(({ atMs }) => ({ atMs, valueMg: 5 }))
		)
	).toEqual({});
});
