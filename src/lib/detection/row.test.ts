import { describe, expect, test } from 'vitest';
import type { Vec3 } from '$lib/magnetics/vector';
import {
	beats,
	BURST_MS,
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
const level = (atMs: number, readings: number, fieldMg: Vec3) =>
	beats(1, atMs, atMs + readings * BURST_MS, fieldMg, BURST_MS);

describe('hold', () => {
	test('a vehicle in a burst arrives: vacant becomes occupied', () => {
		const street = new Street().commission();
		street.play(drives(1, READY, QUIET, TAKEN));
		expect(street.entries().at(-1)).toMatchObject({ type: 'arrival', state: 'occupied' });
		expect(street.view()).toMatchObject({ state: 'occupied', sinceMs: street.entries()[1]!.atMs });
	});

	test('a level that has stood for 2.5 s is not judged, at 3 s it is', () => {
		const street = new Street([memberOf(1)], 0).commission();
		street.play(level(READY, 6, TAKEN));
		expect(street.moves()).toEqual([]);
		street.play(level(READY + 3 * S, 1, TAKEN));
		expect(street.moves()).toEqual(['arrival']);
		expect(street.entries().at(-1)?.decidedAtMs).toBe(READY + 3 * S);
	});

	test('one reading is never enough, however far off', () => {
		const street = new Street().commission();
		street.play(level(READY, 1, plus(QUIET, upward(900))));
		street.play(beats(1, READY + MIN, READY + 10 * MIN, QUIET));
		expect(street.moves()).toEqual([]);
		expect(street.view().state).toBe('vacant');
	});

	test('over the threshold but never still for 3 s is no arrival', () => {
		const street = new Street().commission();
		const wander = Array.from({ length: 40 }, (_, i) => plus(QUIET, upward(80 + 30 * Math.sin(i))));
		street.play(
			wander.map((fieldMg, i) => ({ nodeId: 1, atMs: READY + i * BURST_MS, fieldMg })),
			beats(1, READY + MIN, READY + 3 * MIN, QUIET)
		);
		expect(street.moves()).toEqual([]);
	});

	test('a pass, over the threshold for 2 s and back, is no arrival and is counted', () => {
		const street = new Street().commission();
		street.play(
			level(READY, 4, plus(QUIET, upward(60))),
			level(READY + 2 * S, 10, QUIET),
			beats(1, READY + MIN, READY + 10 * MIN, QUIET)
		);
		expect(street.moves()).toEqual([]);
		expect(street.group.nodes[0]!.fast.passN).toBe(1);
		expect(street.group.active).toBe(0);
	});

	test('a bay stays occupied when the field dips for less than the hold', () => {
		const street = new Street().commission();
		street.play(drives(1, READY, QUIET, TAKEN), beats(1, READY + MIN, READY + 10 * MIN, TAKEN));
		street.play(
			level(READY + 10 * MIN, 4, QUIET),
			level(READY + 10 * MIN + 2 * S, 10, TAKEN),
			beats(1, READY + 11 * MIN, READY + 15 * MIN, TAKEN)
		);
		expect(street.moves()).toEqual(['arrival']);
	});

	test('a noisy level counts as still within 4 sigma', () => {
		const street = new Street([memberOf(1)], 1.5).commission();
		street.play(drives(1, READY, QUIET, TAKEN), beats(1, READY + MIN, READY + 5 * MIN, TAKEN));
		expect(street.moves()).toEqual(['arrival']);
	});
});

describe('slow reporters', () => {
	test('two agreeing heartbeats are an arrival, one is none', () => {
		const street = new Street().commission();
		street.play(beats(1, READY, READY + 5 * MIN, QUIET));
		street.play(beats(1, READY + 5 * MIN, READY + 6 * MIN, TAKEN));
		expect(street.moves()).toEqual([]);
		street.play(beats(1, READY + 6 * MIN, READY + 7 * MIN, TAKEN));
		expect(street.moves()).toEqual(['arrival']);
	});

	test('two heartbeats that disagree by more than the still box wait for a third', () => {
		const street = new Street().commission();
		street.play(beats(1, READY, READY + 2 * MIN, QUIET));
		street.play(beats(1, READY + 2 * MIN, READY + 3 * MIN, plus(TAKEN, upward(20))));
		street.play(beats(1, READY + 3 * MIN, READY + 4 * MIN, TAKEN));
		expect(street.moves()).toEqual([]);
		street.play(beats(1, READY + 4 * MIN, READY + 5 * MIN, TAKEN));
		expect(street.moves()).toEqual(['arrival']);
	});

	test('a departure between heartbeats is seen too', () => {
		const street = new Street().commission();
		street.play(
			beats(1, READY, READY + 5 * MIN, QUIET),
			beats(1, READY + 5 * MIN, READY + 20 * MIN, TAKEN),
			beats(1, READY + 20 * MIN, READY + 23 * MIN, QUIET)
		);
		expect(street.moves()).toEqual(['arrival', 'departure']);
	});
});

describe('time of an event', () => {
	test('in a burst it is the first crossing of the threshold', () => {
		const street = new Street([memberOf(1)], 0).commission();
		const rise = [10, 20, 30, 40, 120, ...Array.from({ length: 9 }, () => 90)];
		street.play(
			rise.map((mg, i) => ({
				nodeId: 1,
				atMs: READY + i * BURST_MS,
				fieldMg: plus(QUIET, upward(mg))
			}))
		);
		// 40 mG is the first over 35 mG: the fourth reading.
		expect(street.entries().at(-1)).toMatchObject({ atMs: READY + 1500, uncertaintyS: 1 });
	});

	test('between heartbeats it is the middle between the last old and the first new reading', () => {
		const street = new Street([memberOf(1)], 0).commission();
		street.play(
			beats(1, READY, READY + 4 * MIN, QUIET),
			beats(1, READY + 4 * MIN, READY + 8 * MIN, TAKEN)
		);
		expect(street.entries().at(-1)).toMatchObject({
			type: 'arrival',
			atMs: READY + 3.5 * MIN,
			uncertaintyS: 30
		});
	});

	test('every entry carries an uncertainty and the time that decided it', () => {
		const street = new Street().commission();
		street.play(
			drives(1, READY, QUIET, TAKEN),
			beats(1, READY + MIN, READY + 8 * MIN, TAKEN),
			drives(1, READY + 8 * MIN, TAKEN, QUIET)
		);
		for (const e of street.entries()) {
			expect(e.uncertaintyS).toBeGreaterThanOrEqual(0);
			expect(e.decidedAtMs).toBeGreaterThanOrEqual(e.atMs);
		}
		expect(street.moves()).toEqual(['arrival', 'departure']);
	});
});

describe('baseline', () => {
	const zOf = (street: Street) => street.view().baselineMg![2];

	test('it follows a slow change while vacant', () => {
		const street = new Street([memberOf(1)], 0).commission();
		street.play(
			beats(1, READY, READY + 6 * HOUR, (t) => plus(QUIET, upward((t - READY) / (HOUR / 4))))
		);
		expect(street.moves()).toEqual([]);
		// 24 mG in 6 h; a filter of 30 min lags by half an hour: 2 mG.
		expect(zOf(street)).toBeGreaterThan(420 + 24 - 4);
		expect(zOf(street)).toBeLessThan(420 + 24);
	});

	test('it moves by 1 - exp(-dt/tau) of the distance at each reading', () => {
		const street = new Street([memberOf(1)], 0).commission();
		const before = zOf(street);
		street.play(beats(1, READY, READY + 30 * MIN, plus(QUIET, upward(3)), MIN));
		// 30 readings a minute apart over tau = 30 min: 1 - e^-1 = 0.632 of 3 mG; the first lies 30 s back.
		expect((zOf(street) - before) / 3).toBeGreaterThan(0.6);
		expect((zOf(street) - before) / 3).toBeLessThan(0.65);
	});

	test('it is not frozen by its distance: 20 mG off and still it is followed home', () => {
		const street = new Street([memberOf(1)], 0).commission();
		street.play(beats(1, READY, READY + 4 * HOUR, plus(QUIET, upward(20))));
		expect(street.moves()).toEqual([]);
		expect(zOf(street)).toBeCloseTo(440, 0);
	});

	test('it learns nothing while occupied', () => {
		const street = new Street([memberOf(1)], 0).commission();
		street.play(drives(1, READY, QUIET, TAKEN), beats(1, READY + MIN, READY + 8 * HOUR, TAKEN));
		expect(zOf(street)).toBeCloseTo(420, 2);
	});

	test('it learns nothing from readings that are not still', () => {
		const street = new Street([memberOf(1)], 0).commission();
		const before = zOf(street);
		const shaken = (t: number) => plus(QUIET, upward(((t / MIN) % 2) * 12 + 6));
		street.play(beats(1, READY, READY + 2 * HOUR, shaken));
		expect(Math.abs(zOf(street) - before)).toBeLessThan(1);
	});

	test('after a departure the next 4 still readings are the baseline', () => {
		const street = new Street([memberOf(1)], 0).commission();
		const home = plus(QUIET, upward(8));
		street.play(
			drives(1, READY, QUIET, TAKEN),
			beats(1, READY + MIN, READY + 30 * MIN, TAKEN),
			drives(1, READY + 30 * MIN, TAKEN, home),
			beats(1, READY + 31 * MIN, READY + 36 * MIN, home)
		);
		expect(zOf(street)).toBeCloseTo(428, 1);
	});
});

test('a reading of 0 mG is kept: a field of 0 on an axis is learned, and a step to it is seen', () => {
	const flat: Vec3 = [0, 0, 420];
	const street = new Street([memberOf(1)], 0).commission('person', flat);
	expect(street.view().baselineMg).toEqual(flat);
	const taken: Vec3 = [80, 90, 420];
	street.play(drives(1, READY, flat, taken), beats(1, READY + MIN, READY + 5 * MIN, taken));
	street.play(
		drives(1, READY + 5 * MIN, taken, flat),
		beats(1, READY + 6 * MIN, READY + 9 * MIN, flat)
	);
	expect(street.moves()).toEqual(['arrival', 'departure']);
	expect(street.view().fieldMg).toEqual(flat);
});

test('a temperature of 0 °C is a temperature', () => {
	const street = new Street([memberOf(1)], 0);
	street.tempC = 0;
	street.commission();
	const learned = street.told.flatMap((o) => (o.kind === 'learned' ? [o.reference.tempC] : []));
	expect(learned).toEqual([0]);
});

describe('step rule', () => {
	test('a drift of 120 mG over 6 h is never an arrival', () => {
		const street = new Street().commission();
		street.play(
			beats(1, READY, READY + 6 * HOUR, (t) => plus(QUIET, upward((20 * (t - READY)) / HOUR)))
		);
		expect(street.moves()).toEqual([]);
		expect(street.view().state).toBe('vacant');
	});

	test('a drift that the baseline cannot follow makes the bay doubtful, not occupied', () => {
		const street = new Street().commission();
		street.play(
			beats(1, READY, READY + HOUR, (t) => plus(QUIET, upward((150 * (t - READY)) / HOUR))),
			beats(1, READY + HOUR, READY + 2 * HOUR, plus(QUIET, upward(150)))
		);
		expect(street.moves()).toEqual([]);
		expect(street.view().doubt).not.toBeNull();
	});

	test('two steps of 25 mG each an hour apart are no vehicle', () => {
		const street = new Street().commission();
		street.play(
			drives(1, READY, QUIET, plus(QUIET, upward(25)), QUIET),
			beats(1, READY + MIN, READY + HOUR, plus(QUIET, upward(25))),
			beats(1, READY + HOUR, READY + 2 * HOUR, plus(QUIET, times(upward(1), 50)))
		);
		expect(street.view().state).toBe('vacant');
	});
});
