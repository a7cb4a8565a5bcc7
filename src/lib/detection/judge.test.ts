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

const CAR: Vec3 = [60, 90, -80];
const TAKEN = plus(QUIET, CAR);
const upward = (mg: number): Vec3 => [0, 0, mg];

/** Silence from READY to `untilMs`, then a minute's beats of one field. */
function afterSilence(street: Street, untilMs: number, fieldMg: Vec3): Street {
	street.play(beats(1, untilMs, untilMs + 10 * MIN, fieldMg));
	return street;
}

describe('after a gap the state goes by level', () => {
	test('a vehicle that came during 10 min of silence is an arrival, and the evidence says so', () => {
		const street = afterSilence(new Street().commission(), READY + 10 * MIN, TAKEN);
		expect(street.moves()).toEqual(['arrival']);
		const said = street.entries().at(-1)!;
		expect(said.evidence.because.join('; ')).toMatch(/during a gap of 1[01] min/);
		// The middle of the silence, give or take half of it: last heard 30 s before READY.
		expect(said.atMs).toBe(READY - 30 * S + (10.5 * MIN) / 2);
		expect(said.uncertaintyS).toBe(315);
	});

	test('and less sure than one that was seen to come', () => {
		const seen = new Street().commission();
		seen.play(drives(1, READY, QUIET, TAKEN));
		const unseen = afterSilence(new Street().commission(), READY + 10 * MIN, TAKEN);
		expect(unseen.view().confidence!).toBeLessThan(seen.view().confidence!);
	});

	test('a vehicle that left during a gap has departed', () => {
		const street = new Street().commission();
		street.play(drives(1, READY, QUIET, TAKEN), beats(1, READY + MIN, READY + 5 * MIN, TAKEN));
		afterSilence(street, READY + 15 * MIN, QUIET);
		expect(street.moves()).toEqual(['arrival', 'departure']);
		expect(street.entries().at(-1)!.evidence.because.join()).toContain('during a gap of');
	});

	test('a change that temperature can explain is no vehicle but makes the bay doubtful', () => {
		const cold = new Street();
		cold.tempC = 10;
		cold.commission();
		cold.tempC = 30;
		afterSilence(cold, READY + 14 * MIN, plus(QUIET, upward(45)));
		expect(cold.moves()).toEqual([]);
		expect(cold.view()).toMatchObject({ state: 'vacant' });
		expect(cold.view().doubt?.reason).toBe('field moved during a gap');
	});

	test('the same change at one temperature is a vehicle', () => {
		const street = new Street();
		street.tempC = 10;
		street.commission();
		afterSilence(street, READY + 14 * MIN, plus(QUIET, upward(45)));
		expect(street.moves()).toEqual(['arrival']);
	});

	test('a silence in which nothing moved changes nothing', () => {
		const street = afterSilence(new Street().commission(), READY + 10 * MIN, QUIET);
		expect(street.entries()).toHaveLength(1);
		expect(street.view().doubt).toBeNull();
	});
});

describe('ledger', () => {
	test('a departure undoes its arrival although residue is left', () => {
		const street = new Street().commission();
		const residue = plus(QUIET, times(CAR, 0.3));
		street.play(
			drives(1, READY, QUIET, TAKEN),
			beats(1, READY + MIN, READY + 30 * MIN, TAKEN),
			drives(1, READY + 30 * MIN, TAKEN, residue),
			beats(1, READY + 31 * MIN, READY + 40 * MIN, residue)
		);
		expect(street.moves()).toEqual(['arrival', 'departure']);
	});

	test('an afternoon that warms the field by 60 mG under a vehicle does not hide its departure', () => {
		const street = new Street().commission();
		const warm = (t: number): Vec3 => upward(Math.min(60, (60 * (t - READY - MIN)) / (6 * HOUR)));
		const end = READY + MIN + 6 * HOUR;
		street.play(
			drives(1, READY, QUIET, TAKEN),
			beats(1, READY + MIN, end, (t) => plus(TAKEN, warm(t))),
			drives(1, end, plus(TAKEN, upward(60)), plus(QUIET, upward(60))),
			beats(1, end + MIN, end + 10 * MIN, plus(QUIET, upward(60)))
		);
		expect(street.moves()).toEqual(['arrival', 'departure']);
		expect(street.view().baselineMg![2]).toBeCloseTo(480, -1);
	});

	test('a step that takes back a third of the arrival is no departure', () => {
		const street = new Street().commission();
		const less = plus(QUIET, times(CAR, 0.67));
		street.play(
			drives(1, READY, QUIET, TAKEN),
			beats(1, READY + MIN, READY + 10 * MIN, TAKEN),
			drives(1, READY + 10 * MIN, TAKEN, less, less),
			beats(1, READY + 11 * MIN, READY + 20 * MIN, less)
		);
		expect(street.moves()).toEqual(['arrival']);
	});

	test('a vehicle that shifts within its bay stays, and its leaving undoes both steps', () => {
		const street = new Street().commission();
		const shifted = plus(QUIET, [120, 20, -150]);
		street.play(
			drives(1, READY, QUIET, TAKEN),
			beats(1, READY + MIN, READY + 10 * MIN, TAKEN),
			drives(1, READY + 10 * MIN, TAKEN, shifted, shifted),
			beats(1, READY + 11 * MIN, READY + 20 * MIN, shifted),
			drives(1, READY + 20 * MIN, shifted, QUIET),
			beats(1, READY + 21 * MIN, READY + 25 * MIN, QUIET)
		);
		expect(street.moves()).toEqual(['arrival', 'departure']);
	});

	test('a second vehicle within a minute of the first leaving is a stay of its own', () => {
		const street = new Street().commission();
		const second = plus(QUIET, [-90, 40, 150]);
		street.play(
			drives(1, READY, QUIET, TAKEN),
			beats(1, READY + MIN, READY + 10 * MIN, TAKEN),
			drives(1, READY + 10 * MIN, TAKEN, QUIET),
			drives(1, READY + 10 * MIN + 30 * S, QUIET, second),
			beats(1, READY + 12 * MIN, READY + 15 * MIN, second)
		);
		expect(street.moves()).toEqual(['arrival', 'departure', 'arrival']);
	});
});

describe('the accepted reference', () => {
	test('a still field at the reference is vacant whatever the running baseline says', () => {
		const street = new Street([memberOf(1)], 0.1).commission();
		const node = street.group.nodes[0]!;
		// The baseline has been led astray by 70 mG, its level with it.
		for (const i of [0, 1, 2] as const) {
			node.fast.baseline[i] += [0, 0, 70][i]!;
			node.fast.level[i] += [0, 0, 70][i]!;
			node.fast.last[i] += [0, 0, 70][i]!;
		}
		street.play(drives(1, READY, plus(QUIET, upward(70)), QUIET, plus(QUIET, upward(-40))));
		street.play(beats(1, READY + MIN, READY + 10 * MIN, QUIET));
		expect(street.moves()).toEqual([]);
		expect(street.view()).toMatchObject({ state: 'vacant', doubt: null });
		expect(street.view().baselineMg![2]).toBeCloseTo(420, 0);
	});

	test('an occupied bay whose field steps to the reference has been left', () => {
		const street = new Street([memberOf(1)], 0.1).commission();
		street.play(drives(1, READY, QUIET, TAKEN), beats(1, READY + MIN, READY + 10 * MIN, TAKEN));
		const node = street.group.nodes[0]!;
		for (const i of [0, 1, 2] as const) node.fast.baseline[i] -= [80, 0, 0][i]!;
		street.play(drives(1, READY + 10 * MIN, TAKEN, QUIET));
		street.play(beats(1, READY + 11 * MIN, READY + 13 * MIN, QUIET));
		expect(street.moves()).toEqual(['arrival', 'departure']);
	});
});

describe('evidence and confidence', () => {
	test('an arrival says disturbance, threshold and rise', () => {
		const street = new Street([memberOf(1)], 0).commission();
		street.play(drives(1, READY, QUIET, TAKEN));
		// |(60, 90, -80)| = 134.5 mG
		expect(street.entries().at(-1)!.evidence.because[0]).toBe(
			'disturbance 135 mG, threshold 35 mG'
		);
		expect(street.entries().at(-1)!.evidence.because[1]).toMatch(/^rose 135 mG in \d+ s$/);
	});

	test('a faint vehicle is less sure than a clear one', () => {
		const faint = new Street([memberOf(1)], 0.1).commission();
		const low = plus(QUIET, upward(40));
		faint.play(drives(1, READY, QUIET, low, low));
		const clear = new Street([memberOf(1)], 0.1).commission();
		clear.play(drives(1, READY, QUIET, TAKEN));
		expect(faint.view().state).toBe('occupied');
		expect(faint.view().confidence!).toBeLessThan(clear.view().confidence!);
	});

	test('while a vehicle moves over the node its state is unsure, and sure again when it has gone by', () => {
		const street = new Street([memberOf(1)], 0.1).commission();
		const sure = street.view().confidence!;
		street.play(beats(1, READY, READY + S, plus(QUIET, upward(60)), 500));
		expect(street.view()).toMatchObject({ state: 'vacant', confidence: 0.37 });
		street.play(beats(1, READY + S, READY + 10 * S, QUIET, 500));
		expect(street.view()).toMatchObject({ state: 'vacant', confidence: sure });
	});

	test('a level that crept over the threshold makes a bay held free unsure', () => {
		const street = new Street([memberOf(1)], 0.1).commission();
		const creep = (atMs: number) => plus(QUIET, upward((60 * (atMs - READY)) / HOUR));
		street.play(beats(1, READY, READY + HOUR, creep));
		expect(street.view().doubt?.reason).toBe('the field crossed the threshold slowly');
		expect(street.view()).toMatchObject({ state: 'vacant', confidence: 0.37 });
	});
});
