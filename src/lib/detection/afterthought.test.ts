import { describe, expect, test } from 'vitest';
import type { Vec3 } from '$lib/magnetics/vector';
import { beats, drives, MIN, plus, QUIET, READY, Street, times } from './rows.fixture';

/** |CAR| = √(30² + 30² + 25²) = 49.2 mG: a small vehicle (on 35, off 24.5 mG). */
const CAR: Vec3 = [30, 30, -25];
const TAKEN = plus(QUIET, CAR);
/** What stands in the lane takes most of it back: |CAR + LANE| = √(8² + 6² + 9²) = 13.5 mG. */
const LANE: Vec3 = [-22, -24, 16];
const HIDDEN = plus(TAKEN, LANE);

function parked(): Street {
	const street = new Street().commission();
	street.play(
		drives(1, READY, QUIET, TAKEN),
		beats(1, READY + MIN, READY + 20 * MIN, TAKEN),
		drives(1, READY + 20 * MIN, TAKEN, HIDDEN)
	);
	expect(street.moves()).toEqual(['arrival', 'departure']);
	return street;
}

describe('a departure that did not quite fit is taken back', () => {
	test('when the vehicle’s own leaving undoes its arrival better: that is the departure', () => {
		const street = parked();
		const gone = plus(QUIET, LANE);
		street.play(
			beats(1, READY + 21 * MIN, READY + 60 * MIN, HIDDEN),
			drives(1, READY + 60 * MIN, HIDDEN, gone),
			beats(1, READY + 61 * MIN, READY + 64 * MIN, gone)
		);
		expect(street.voids().map(({ type }) => type)).toEqual(['departure']);
		expect(street.moves()).toEqual(['arrival', 'departure', 'departure']);
		expect(street.view().state).toBe('vacant');
		expect(street.entries().at(-1)?.atMs).toBeGreaterThan(READY + 59 * MIN);
	});

	test('when what stood in the lane moves on and the vehicle’s level is back: it had stayed', () => {
		const street = parked();
		street.play(
			beats(1, READY + 21 * MIN, READY + 25 * MIN, HIDDEN),
			drives(1, READY + 25 * MIN, HIDDEN, TAKEN),
			beats(1, READY + 26 * MIN, READY + 30 * MIN, TAKEN)
		);
		expect(street.voids()).toHaveLength(1);
		expect(street.view()).toMatchObject({ state: 'occupied' });
		expect(street.view().sinceMs).toBeLessThan(READY + MIN);
	});

	test('but not by another vehicle that comes later', () => {
		const street = parked();
		const other = plus(HIDDEN, [60, -40, 50]);
		street.play(
			beats(1, READY + 21 * MIN, READY + 60 * MIN, HIDDEN),
			drives(1, READY + 60 * MIN, HIDDEN, other),
			beats(1, READY + 61 * MIN, READY + 64 * MIN, other)
		);
		expect(street.voids()).toEqual([]);
		expect(street.moves()).toEqual(['arrival', 'departure', 'arrival']);
	});
});

test('a step that leaves the level under release but did not bring it there is no departure', () => {
	const street = new Street().commission();
	// 49 mG shrink over hours to 28 (drift); then 20 mG in another direction: d 28 -> 20, as before a neighbour moves.
	const shrunk = plus(QUIET, times(CAR, 0.57));
	const moved = plus(shrunk, [-16, 10, -6]);
	street.play(
		drives(1, READY, QUIET, TAKEN),
		beats(1, READY + MIN, READY + 240 * MIN, (atMs) =>
			plus(QUIET, times(CAR, 1 - (0.43 * (atMs - READY)) / (240 * MIN)))
		),
		drives(1, READY + 240 * MIN, shrunk, moved),
		beats(1, READY + 241 * MIN, READY + 245 * MIN, moved)
	);
	expect(street.moves()).toEqual(['arrival']);
});
