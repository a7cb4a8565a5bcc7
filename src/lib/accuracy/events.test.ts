import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import {
	matchEvents,
	ownTolerance,
	scoreEvents,
	strictTolerance,
	type SaidEvent,
	type TrueEvent
} from './events';

const happened = (atS: number, type: TrueEvent['type'] = 'arrival', bay = 'A1'): TrueEvent => ({
	bay,
	type,
	atMs: atS * 1000
});
const said = (atS: number, uncertaintyS = 0, type: TrueEvent['type'] = 'arrival', bay = 'A1') => ({
	...happened(atS, type, bay),
	uncertaintyS
});

describe('the tolerance', () => {
	// Source: method.md 9: max(60 s, own uncertainty + 30 s), at most 150 s.
	test.each([
		[0, 60],
		[30, 60],
		[31, 61],
		[90, 120],
		[120, 150],
		[600, 150]
	])('uncertainty %i s gives %i s', (uncertaintyS, toleranceS) => {
		expect(ownTolerance(said(0, uncertaintyS))).toBe(toleranceS * 1000);
		expect(strictTolerance(said(0, uncertaintyS))).toBe(60_000);
	});
});

describe('matching', () => {
	test('an event within 60 s matches either side, at 61 s it is one missed and one false', () => {
		expect(matchEvents([happened(100)], [said(160)]).matched).toHaveLength(1);
		expect(matchEvents([happened(100)], [said(40)]).matched).toHaveLength(1);
		const off = matchEvents([happened(100)], [said(161)]);
		expect([off.matched.length, off.missed.length, off.false.length]).toEqual([0, 1, 1]);
	});

	test('a stated uncertainty widens the window, not the strict one', () => {
		expect(matchEvents([happened(0)], [said(120, 100)]).matched).toHaveLength(1);
		expect(matchEvents([happened(0)], [said(120, 100)], strictTolerance).matched).toHaveLength(0);
	});

	test('another bay or another type never matches', () => {
		expect(matchEvents([happened(0)], [said(0, 0, 'departure')]).matched).toHaveLength(0);
		expect(matchEvents([happened(0)], [said(0, 0, 'arrival', 'A2')]).matched).toHaveLength(0);
	});

	test('one to one: two said for one true leave one false', () => {
		const found = matchEvents([happened(0)], [said(-5), said(5)]);
		expect([found.matched.length, found.missed.length, found.false.length]).toEqual([1, 0, 1]);
	});

	test('as many as can are matched, though the nearest pairing would leave one out', () => {
		const found = matchEvents([happened(0), happened(50)], [said(45), said(-55)]);
		expect(found.matched).toHaveLength(2);
	});

	test('how late it was said is kept', () => {
		expect(matchEvents([happened(10)], [said(17)]).matched[0]!.lateMs).toBe(7000);
	});

	const times = fc.array(fc.integer({ min: 0, max: 600 }), { maxLength: 6 });
	test('it is the largest matching: never fewer than by trying all', () => {
		fc.assert(
			fc.property(
				times,
				fc.array(fc.tuple(fc.integer({ min: 0, max: 600 }), fc.nat(120)), { maxLength: 6 }),
				(t, s) => {
					const truths = t.map((at) => happened(at));
					const saids = s.map(([at, uncertainty]) => said(at, uncertainty));
					const found = matchEvents(truths, saids);
					expect(found.matched).toHaveLength(mostBySearch(truths, saids));
					expect(found.matched.length + found.missed.length).toBe(truths.length);
					expect(found.matched.length + found.false.length).toBe(saids.length);
					for (const { truth, said: one } of found.matched)
						expect(Math.abs(one.atMs - truth.atMs)).toBeLessThanOrEqual(ownTolerance(one));
				}
			)
		);
	});
});

/** All ways, for a few events. */
function mostBySearch(truths: readonly TrueEvent[], saids: readonly SaidEvent[]): number {
	const [first, ...rest] = truths;
	if (first === undefined) return 0;
	let most = mostBySearch(rest, saids);
	for (const [i, one] of saids.entries()) {
		if (Math.abs(one.atMs - first.atMs) > ownTolerance(one)) continue;
		most = Math.max(most, 1 + mostBySearch(rest, saids.toSpliced(i, 1)));
	}
	return most;
}

describe('the score', () => {
	// Hand: 8 matched, 2 missed, 1 false: P 8/9, R 8/10, F1 16/19.
	test('precision, recall and F1', () => {
		const score = scoreEvents({ matched: Array(8), missed: Array(2), false: Array(1) });
		expect(score.precision).toBeCloseTo(8 / 9, 12);
		expect(score.recall).toBeCloseTo(0.8, 12);
		expect(score.f1).toBeCloseTo(16 / 19, 12);
	});

	test('nothing said and nothing happened has no share', () => {
		expect(scoreEvents({ matched: [], missed: [], false: [] })).toMatchObject({
			precision: null,
			recall: null,
			f1: null
		});
	});
});
