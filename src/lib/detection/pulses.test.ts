import { describe, expect, test } from 'vitest';
import type { Vec3 } from '$lib/magnetics/vector';
import {
	beats,
	drives,
	HOUR,
	memberOf,
	MIN,
	plus,
	QUIET,
	READY,
	S,
	Street,
	times
} from './rows.fixture';
import type { PulseItem } from './types';

const CAR: Vec3 = [60, 90, -80];
const TAKEN = plus(QUIET, CAR);
const NO: Vec3 = [0, 0, 0];
const O1: Vec3 = [30, -20, 10];
const near = (a: Vec3 | null, b: Vec3, mg = 2): void => {
	for (const i of [0, 1, 2] as const) expect(Math.abs((a ?? NO)[i] - b[i])).toBeLessThan(mg);
};

/** A pair in a field: SET reads B + O, RESET reads -B + O (method 2); before as told. */
function pairIn(field: Vec3, offset: Vec3, beforeMg: Vec3 | null = field): Partial<PulseItem> {
	return {
		source: 'pair',
		setMg: plus(field, offset),
		resetMg: plus(times(field, -1), offset),
		before: beforeMg === null ? null : { polarity: 1, rawMg: plus(beforeMg, offset) },
		afterMg: beforeMg === null ? null : plus(field, offset),
		polarityAfter: 1
	};
}

const judged = (street: Street) => street.told.filter((o) => o.kind === 'pulse_judged').at(-1);

describe('a pair', () => {
	test('its offset is half the sum of SET and RESET', () => {
		// check-values.md 5b: S = 140498, R = 124114 counts of null 131072 at 16384 counts/G [C]
		// -> S = 575.317…, R = -424.682… mG; B = 500.000 mG, O = 75.3173828125 mG.
		const set = ((140498 - 131072) / 16384) * 1000;
		const reset = ((124114 - 131072) / 16384) * 1000;
		const street = new Street([memberOf(1)], 0);
		street.commission('person', [set, set, set]);
		street.pulse(READY, { setMg: [set, set, set], resetMg: [reset, reset, reset] });
		for (const i of [0, 1, 2] as const) {
			expect(street.view().offsetMg![i]).toBeCloseTo(75.3173828125, 9);
		}
		street.play(beats(1, READY + MIN, READY + 3 * MIN, [set, set, set]));
		expect(street.view().fieldMg![0]).toBeCloseTo(500, 3);
	});

	test('a new offset never looks like a vehicle: b moves by O - O’, field and disturbance stay together', () => {
		const street = new Street();
		street.offsetMg = O1;
		street.commission();
		street.pulse(READY, pairIn(QUIET, O1));
		near(street.view().baselineMg, QUIET);
		// The bridge's offset drifts; the baseline has followed it when the next pair finds it.
		street.offsetMg = plus(O1, [14, -13, 12]);
		const at = READY + 4 * HOUR;
		street.play(beats(1, READY + MIN, at, QUIET));
		near(street.view().baselineMg, plus(QUIET, [14, -13, 12]));
		street.pulse(at, pairIn(QUIET, plus(O1, [14, -13, 12])));
		near(street.view().baselineMg, QUIET);
		street.play(beats(1, at + MIN, at + 20 * MIN, QUIET));
		expect(street.moves()).toEqual([]);
		expect(street.view().offsetMg).toEqual([44, -33, 22]);
		near(street.view().baselineMg, QUIET);
		expect(street.view().disturbanceMg).toBeLessThan(4);
	});

	test('a first offset of 500 mG is no vehicle either, vacant or taken', () => {
		for (const field of [QUIET, TAKEN]) {
			const street = new Street();
			street.offsetMg = [500, -300, 200];
			street.commission();
			if (field === TAKEN) {
				street.play(drives(1, READY, QUIET, TAKEN), beats(1, READY + MIN, READY + 5 * MIN, TAKEN));
			}
			const before = street.moves();
			street.pulse(READY + 5 * MIN, pairIn(field, [500, -300, 200]));
			street.play(beats(1, READY + 6 * MIN, READY + 15 * MIN, field));
			expect(street.moves()).toEqual(before);
			near(street.view().baselineMg, QUIET);
		}
	});

	test('it is refused when the reading after it does not repeat the SET reading', () => {
		const street = new Street().commission();
		street.pulse(READY, { ...pairIn(QUIET, NO), afterMg: plus(QUIET, [9, 0, 0]) });
		expect(judged(street)).toMatchObject({ accepted: false });
		expect(judged(street)).toHaveProperty('why', expect.stringContaining('does not repeat'));
		expect(street.view().offsetMg).toBeNull();
	});

	test('it is refused while the field moves', () => {
		const street = new Street().commission();
		street.play(drives(1, READY, QUIET, TAKEN).slice(0, 3));
		street.pulse(READY + 1.5 * S, pairIn(TAKEN, NO));
		expect(judged(street)).toMatchObject({ accepted: false, why: 'the field moved around it' });
	});

	test('one that comes before counts is judged by set and after alone', () => {
		const street = new Street();
		street.act(READY, { kind: 'place', preCommissioned: false });
		street.pulse(READY + S, pairIn(QUIET, O1, null));
		expect(judged(street)).toMatchObject({ accepted: true, why: null });
		expect(street.view().offsetMg).toEqual(O1);
	});

	test('no second offset is asked for by a node that has one when it is placed again', () => {
		const street = new Street();
		street.pulse(READY - S, pairIn(QUIET, O1, null));
		street.act(READY, { kind: 'place', preCommissioned: false });
		expect(street.asks()).toEqual(['report_fast: learning']);
	});
});

describe('re-anchoring', () => {
	const lost: Vec3 = times(QUIET, 0.8);

	test('vacant: the baseline becomes B_after - (B_before - b), the state is held', () => {
		const street = new Street().commission();
		street.play(
			beats(1, READY, READY + 10 * HOUR, (t) => times(QUIET, 1 - (0.2 * (t - READY)) / (10 * HOUR)))
		);
		// The film had lost a fifth; the pulse heals it at once.
		const at = READY + 10 * HOUR;
		const b = street.view().baselineMg!;
		street.pulse(at, { source: 'ack', before: { polarity: 1, rawMg: lost }, afterMg: QUIET });
		near(
			street.view().baselineMg,
			plus(QUIET, [b[0] - lost[0], b[1] - lost[1], b[2] - lost[2]]),
			0.01
		);
		street.play(beats(1, at + MIN, at + 10 * MIN, QUIET));
		expect(street.moves()).toEqual([]);
		expect(street.view()).toMatchObject({ state: 'vacant', doubt: null });
	});

	test('taken: baseline and arrival step grow by B_after / B_before, confidence is capped at 0.8 until the next vacancy', () => {
		const street = new Street().commission();
		street.pulse(READY, pairIn(QUIET, NO));
		street.play(
			drives(1, READY + MIN, QUIET, TAKEN),
			beats(1, READY + 2 * MIN, READY + 5 * MIN, TAKEN)
		);
		const at = READY + 5 * MIN;
		// A film at 1 / 1.25 of its gain is healed: every axis reads 1.25 of what it read.
		street.pulse(at, {
			source: 'ack',
			before: { polarity: 1, rawMg: TAKEN },
			afterMg: times(TAKEN, 1.25)
		});
		near(street.view().baselineMg, plus(QUIET, [45, 7.5, 85]), 90);
		const b = street.view().baselineMg!;
		expect(b[0]).toBeCloseTo(150, -0.5);
		expect(b[2]).toBeCloseTo(525, -0.5);
		expect(street.group.nodes[0]!.slow.arrival!.step[2]).toBeCloseTo(-100, -0.5);
		street.play(beats(1, at + MIN, at + 5 * MIN, times(TAKEN, 1.25)));
		expect(street.view().state).toBe('occupied');
		expect(street.view().confidence).toBeLessThanOrEqual(0.8);
		street.play(
			drives(1, at + 5 * MIN, times(TAKEN, 1.25), times(QUIET, 1.25)),
			beats(1, at + 6 * MIN, at + 10 * MIN, times(QUIET, 1.25))
		);
		expect(street.moves()).toEqual(['arrival', 'departure']);
		expect(street.view().confidence).toBeGreaterThan(0.8);
	});

	test('taken: an axis under 50 mG is shifted, not scaled', () => {
		const street = new Street();
		street.commission('person', [120, 20, 420]);
		street.pulse(READY, pairIn([120, 20, 420], NO));
		const taken: Vec3 = [180, 10, 340];
		street.play(
			drives(1, READY + MIN, [120, 20, 420], taken),
			beats(1, READY + 2 * MIN, READY + 5 * MIN, taken)
		);
		street.pulse(READY + 5 * MIN, {
			source: 'ack',
			before: { polarity: 1, rawMg: taken },
			afterMg: [180, 15, 340]
		});
		expect(street.view().baselineMg![1]).toBeCloseTo(25, -0.5);
	});

	test('without before and after the rows around the pulse stand for them', () => {
		const street = new Street().commission();
		street.pulse(READY, { source: 'ack' });
		const jumped = plus(QUIET, [0, 0, 12]);
		street.play(
			beats(1, READY + 2.5 * S, READY + 10 * S, jumped, S),
			beats(1, READY + MIN, READY + 10 * MIN, jumped)
		);
		expect(street.moves()).toEqual([]);
		expect(street.view().baselineMg![2]).toBeCloseTo(432, -0.5);
		expect(street.view().doubt).toBeNull();
	});

	test('without before and after a jump of the size of a vehicle makes the bay doubtful, not taken', () => {
		const street = new Street().commission();
		street.pulse(READY, { source: 'ack' });
		street.play(
			beats(1, READY + 2.5 * S, READY + 10 * S, TAKEN, S),
			beats(1, READY + MIN, READY + 10 * MIN, TAKEN)
		);
		expect(street.moves()).toEqual([]);
		expect(street.view().doubt?.reason).toContain('pulse');
	});

	test('no step is judged from the pulse to 2 s after it', () => {
		const street = new Street([memberOf(1)], 0).commission();
		street.pulse(READY, { source: 'ack', before: { polarity: 1, rawMg: QUIET }, afterMg: QUIET });
		// The field rings for 1.5 s after the pulse, then rests where it was.
		street.play(
			beats(1, READY + 0.25 * S, READY + 1.75 * S, plus(QUIET, [300, 0, 0]), 250),
			beats(1, READY + 2 * S, READY + 10 * S, QUIET, S)
		);
		expect(street.moves()).toEqual([]);
		expect(street.group.nodes[0]!.fast.passN).toBe(0);
	});

	test('a RESET leaves the film at polarity -1; rows in it are turned back by their polarity', () => {
		const street = new Street();
		street.commission();
		street.pulse(READY, pairIn(QUIET, NO));
		street.pulse(READY + MIN, {
			source: 'ack',
			before: { polarity: 1, rawMg: QUIET },
			afterMg: times(QUIET, -1),
			polarityAfter: -1
		});
		street.polarity = -1;
		street.play(beats(1, READY + 2 * MIN, READY + 10 * MIN, QUIET));
		expect(street.moves()).toEqual([]);
		expect(street.view().disturbanceMg).toBeLessThan(4);
	});
});

describe('power-on', () => {
	test('a boot’s SET is a pulse: state and baseline are held over it', () => {
		const street = new Street().commission();
		street.play(drives(1, READY, QUIET, TAKEN), beats(1, READY + MIN, READY + 5 * MIN, TAKEN));
		street.pulse(READY + 5 * MIN, { source: 'hello' });
		street.play(beats(1, READY + 6 * MIN, READY + 10 * MIN, TAKEN));
		expect(street.moves()).toEqual(['arrival']);
		expect(street.view()).toMatchObject({ state: 'occupied' });
		near(street.view().baselineMg, QUIET);
	});

	test('a boot in the middle of an arrival does not swallow it', () => {
		const street = new Street().commission();
		street.play(drives(1, READY, QUIET, TAKEN).slice(0, 4));
		street.pulse(READY + 2 * S, { source: 'hello' });
		street.play(
			beats(1, READY + 5 * S, READY + 15 * S, TAKEN, S),
			beats(1, READY + MIN, READY + 5 * MIN, TAKEN)
		);
		expect(street.moves()).toEqual(['arrival']);
	});

	test('every pulse is judged, and a pulse without a pair is accepted', () => {
		const street = new Street().commission();
		street.pulse(READY, { source: 'hello', boot: 2, seq: 1 });
		expect(judged(street)).toMatchObject({ boot: 2, seq: 1, accepted: true, why: null });
	});
});
