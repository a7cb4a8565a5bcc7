import { expect, test } from 'vitest';
import type { CommandRow } from '$lib/server/store/queries/commands';
import { mayOrder, wantedHabit } from './habit-keeper';
import { deltaFor } from './steps/aside';

const NOW = 10_000_000;
const report = (over: Partial<CommandRow>): CommandRow => ({
	id: Buffer.alloc(8),
	nodeId: 1,
	verb: 'report',
	periodS: 60,
	deltaMg: 8,
	boot: 1,
	cause: 'habit',
	byActor: 'rule',
	createdAtMs: 0,
	expiresAtMs: NOW + 1,
	sentAtMs: null,
	sends: 0,
	answeredAtMs: null,
	outcome: null,
	...over
});

test('delta_mg is the larger of 8 and 8 sigma (method 10)', () => {
	expect(deltaFor(null)).toBe(8);
	expect(deltaFor(0.4)).toBe(8);
	expect(deltaFor(1.5)).toBe(12);
});

test('a delta that is off by little stays: noise estimates breathe', () => {
	expect(wantedHabit(60, 12, false, 1.3)).toEqual({ periodS: 60, deltaMg: 12 });
	expect(wantedHabit(60, 8, false, 1.5)).toEqual({ periodS: 60, deltaMg: 12 });
	expect(wantedHabit(60, 8, true, null)).toEqual({ periodS: 2, deltaMg: 8 });
});

test('nothing is ordered while the same wish is open, nor soon after it was answered', () => {
	const wish = { periodS: 60, deltaMg: 8 };
	expect(mayOrder(undefined, wish, NOW)).toBe(true);
	expect(mayOrder(report({}), wish, NOW)).toBe(false);
	expect(mayOrder(report({ answeredAtMs: NOW - 1_000 }), wish, NOW)).toBe(false);
	expect(mayOrder(report({ answeredAtMs: NOW - 900_000 }), wish, NOW)).toBe(true);
	expect(mayOrder(report({ deltaMg: 20 }), wish, NOW)).toBe(true);
});

test('the usual habit comes back a minute after a question was answered', () => {
	const wish = { periodS: 60, deltaMg: 8 };
	const asked = { cause: 'ask: a person', periodS: 2 };
	expect(mayOrder(report({ ...asked, answeredAtMs: NOW - 59_000 }), wish, NOW)).toBe(false);
	expect(mayOrder(report({ ...asked, answeredAtMs: NOW - 60_000 }), wish, NOW)).toBe(true);
	expect(mayOrder(report(asked), wish, NOW)).toBe(false);
});
