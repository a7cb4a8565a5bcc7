import { describe, expect, test } from 'vitest';
import type { Vec3 } from '$lib/magnetics/vector';
import { beats, drives, MIN, plus, QUIET, READY, S, Street, times } from './rows.fixture';

const OFFSET: Vec3 = [40, -25, 15];
const CAR: Vec3 = [90, 60, -120];
const TAKEN = plus(QUIET, CAR);
/** A magnet that nobody saw leaves this share of every axis. */
const LEFT = 0.04;

const pairOf = (before: Vec3, after: Vec3) => ({
	setMg: plus(after, OFFSET),
	resetMg: plus(times(after, -1), OFFSET),
	before: { polarity: 1 as const, rawMg: plus(before, OFFSET) },
	afterMg: plus(after, OFFSET)
});

function withPair(): Street {
	const street = new Street();
	street.offsetMg = OFFSET;
	street.commission();
	street.pulse(READY, pairOf(QUIET, QUIET));
	street.play(beats(1, READY + MIN, READY + 10 * MIN, QUIET));
	return street;
}
const START = READY + 10 * MIN;

describe('a magnet without a witness row', () => {
	test('under a vehicle: after the pulse the vehicle still stands there, and leaves', () => {
		const street = withPair();
		const weak = times(TAKEN, LEFT);
		street.play(
			drives(1, START, QUIET, TAKEN),
			beats(1, START + MIN, START + 10 * MIN, TAKEN),
			beats(1, START + 10 * MIN, START + 60 * MIN, weak)
		);
		street.pulse(START + 60 * MIN, pairOf(weak, TAKEN));
		street.play(
			beats(1, START + 60 * MIN + 5 * S, START + 80 * MIN, TAKEN),
			drives(1, START + 80 * MIN, TAKEN, QUIET),
			beats(1, START + 81 * MIN, START + 85 * MIN, QUIET)
		);
		expect(street.moves()).toEqual(['arrival', 'departure']);
		expect(street.view().disturbanceMg).toBeLessThan(5);
	});

	test('over a vacant bay: the arrival that it made is voided by the pulse', () => {
		const street = withPair();
		const weak = times(QUIET, LEFT);
		street.play(beats(1, START, START + 60 * MIN, weak));
		expect(street.view().state).toBe('occupied');
		street.pulse(START + 60 * MIN, pairOf(weak, QUIET));
		street.play(beats(1, START + 60 * MIN + 5 * S, START + 70 * MIN, QUIET));
		expect(street.voids().map(({ type }) => type)).toEqual(['arrival']);
		expect(street.view()).toMatchObject({ state: 'vacant' });
		expect(street.view().disturbanceMg).toBeLessThan(5);
	});

	test('a vehicle that shrinks the field stays when the pulse heals nothing', () => {
		const street = withPair();
		const shade = times(QUIET, 0.6);
		street.play(
			drives(1, START, QUIET, shade, times(QUIET, 0.5)),
			beats(1, START + MIN, START + 10 * MIN, shade)
		);
		street.pulse(START + 10 * MIN, pairOf(shade, shade));
		street.play(beats(1, START + 10 * MIN + 5 * S, START + 20 * MIN, shade));
		expect(street.voids()).toEqual([]);
		expect(street.view().state).toBe('occupied');
	});
});

test('a pulse while something passes is carried over by its own before and after: no arrival', () => {
	const street = withPair();
	const lost = times(QUIET, 0.8);
	street.play(
		beats(1, START, START + 240 * MIN, (atMs) =>
			times(QUIET, 1 - (0.2 * (atMs - START)) / (240 * MIN))
		)
	);
	const end = START + 240 * MIN;
	street.play([{ nodeId: 1, atMs: end, fieldMg: plus(lost, [20, 0, 0]) }]);
	street.pulse(end + S, pairOf(plus(lost, [20, 0, 0]), plus(QUIET, [25, 0, 0])));
	street.play(beats(1, end + 30 * S, end + 20 * MIN, QUIET, 30 * S));
	expect(street.moves()).toEqual([]);
});

test('a flip is known although the offset has moved by 34 mG since its pair', () => {
	const street = withPair();
	// method 2: r = p B + O; with O off by 34 mG on one axis the mirror is off by 68 mG there, of some 890 mG.
	street.offsetMg = plus(OFFSET, [0, 0, 0]);
	const drifted = (v: Vec3): Vec3 => plus(v, [0, 34, 0]);
	street.play(
		beats(1, START, START + 600 * MIN, (atMs) =>
			plus(QUIET, [0, (34 * (atMs - START)) / (600 * MIN), 0])
		),
		beats(1, START + 600 * MIN, START + 620 * MIN, drifted(times(QUIET, -1)))
	);
	expect(street.moves()).toEqual([]);
	expect(street.view().conditions).toContain('inverted');
});
