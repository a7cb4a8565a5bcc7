import { describe, expect, test } from 'vitest';
import type { Vec3 } from '$lib/magnetics/vector';
import { bays, beats, drives, MIN, plus, QUIET, READY, S, Street } from './rows.fixture';

const CAR: Vec3 = [120, 160, -140];
const TAKEN = plus(QUIET, CAR);
/** 244 mG at the bay, a quarter of it next door. */
const ECHO: Vec3 = [-30, 40, 35];
const ECHOED = plus(QUIET, ECHO);

const two = () => new Street(bays(2)).commission();

/** A vehicle at bay 1 that is felt at bay 2, and some minutes after it. */
function arriveBeside(street: Street, atMs: number, forMin: number): void {
	street.play(
		drives(1, atMs, QUIET, TAKEN),
		drives(2, atMs, QUIET, ECHOED, ECHOED),
		...[1, 2].map((id) => beats(id, atMs + MIN, atMs + forMin * MIN, id === 1 ? TAKEN : ECHOED))
	);
}

describe('echo of a neighbour', () => {
	test('the larger step is the vehicle, the one under 0.55 of it changes no state', () => {
		const street = two();
		arriveBeside(street, READY, 10);
		expect(street.moves(1)).toEqual(['arrival']);
		expect(street.moves(2)).toEqual([]);
		expect(street.view(2).state).toBe('vacant');
	});

	test('the baseline of the bay beside moves by the echo', () => {
		const street = two();
		arriveBeside(street, READY, 4);
		for (const i of [0, 1, 2] as const) {
			expect(street.view(2).baselineMg![i]).toBeCloseTo(ECHOED[i], -0.5);
		}
		expect(street.view(2).disturbanceMg).toBeLessThan(4);
	});

	test('the baseline of a taken bay beside moves too, so that its own departure is still seen', () => {
		const street = two();
		const own = plus(QUIET, [-100, 90, 120]);
		const both = plus(own, ECHO);
		street.play(
			drives(2, READY, QUIET, own),
			...[1, 2].map((id) => beats(id, READY + MIN, READY + 10 * MIN, id === 1 ? QUIET : own))
		);
		const t = READY + 10 * MIN;
		street.play(
			drives(1, t, QUIET, TAKEN),
			drives(2, t, own, both, both),
			...[1, 2].map((id) => beats(id, t + MIN, t + 10 * MIN, id === 1 ? TAKEN : both)),
			drives(2, t + 10 * MIN, both, ECHOED),
			...[1, 2].map((id) => beats(id, t + 11 * MIN, t + 15 * MIN, id === 1 ? TAKEN : ECHOED))
		);
		expect(street.moves(1)).toEqual(['arrival']);
		expect(street.moves(2)).toEqual(['arrival', 'departure']);
	});

	test('an echo that goes with its vehicle leaves no trace', () => {
		const street = two();
		arriveBeside(street, READY, 10);
		const t = READY + 10 * MIN;
		street.play(
			drives(1, t, TAKEN, QUIET),
			drives(2, t, ECHOED, QUIET, QUIET),
			...[1, 2].map((id) => beats(id, t + MIN, t + 10 * MIN, QUIET))
		);
		expect(street.moves(1)).toEqual(['arrival', 'departure']);
		expect(street.moves(2)).toEqual([]);
		expect(street.view(2).disturbanceMg).toBeLessThan(4);
		expect(street.group.byId.get(2)!.slow.echoes).toEqual([]);
	});

	test('an echo that stays when its vehicle has gone was a vehicle, entered at its own time', () => {
		const street = two();
		arriveBeside(street, READY, 10);
		const t = READY + 10 * MIN;
		street.play(
			drives(1, t, TAKEN, QUIET),
			...[1, 2].map((id) => beats(id, t + MIN, t + 10 * MIN, id === 1 ? QUIET : ECHOED))
		);
		expect(street.moves(1)).toEqual(['arrival', 'departure']);
		expect(street.moves(2)).toEqual(['arrival']);
		const late = street.entries(2).at(-1)!;
		expect(Math.abs(late.atMs - READY)).toBeLessThanOrEqual(2 * S);
		expect(late.decidedAtMs).toBeGreaterThan(t);
		expect(late.evidence.because.join()).toContain('stayed when that one left');
		expect(late.evidence.because.join()).toContain('{node:1}');
	});

	test('two vehicles of like size at the same time are two arrivals', () => {
		const street = two();
		const other = plus(QUIET, [140, -120, 130]);
		street.play(
			drives(1, READY, QUIET, TAKEN),
			drives(2, READY + S, QUIET, other),
			...[1, 2].map((id) => beats(id, READY + MIN, READY + 5 * MIN, id === 1 ? TAKEN : other))
		);
		expect(street.moves(1)).toEqual(['arrival']);
		expect(street.moves(2)).toEqual(['arrival']);
	});

	test('a small vehicle that comes half a minute after a large one is no echo', () => {
		const street = two();
		street.play(
			drives(1, READY, QUIET, TAKEN),
			drives(2, READY + 30 * S, QUIET, ECHOED),
			...[1, 2].map((id) => beats(id, READY + MIN, READY + 5 * MIN, id === 1 ? TAKEN : ECHOED))
		);
		expect(street.moves(2)).toEqual(['arrival']);
	});

	test('bays 5 m apart do not hear each other', () => {
		const [a, b] = bays(2);
		const street = new Street([a!, { ...b!, eastM: 5, row: 'B' }]).commission();
		arriveBeside(street, READY, 5);
		expect(street.moves(2)).toEqual(['arrival']);
	});

	test('a node whose place is not known has no neighbours', () => {
		const [a, b] = bays(2);
		const street = new Street([a!, { ...b!, eastM: null, row: null }]).commission();
		arriveBeside(street, READY, 5);
		expect(street.moves(2)).toEqual(['arrival']);
	});

	test('an echo told before its vehicle was decided is voided, and its bay vacant again', () => {
		const street = two();
		// The vehicle's own burst was lost: its bay tells of it by two heartbeats, 30 and 90 s later.
		street.play(
			drives(2, READY, QUIET, ECHOED, ECHOED),
			beats(2, READY + 10 * S, READY + 10 * MIN, ECHOED, 10 * S),
			beats(1, READY + 30 * S, READY + 10 * MIN, TAKEN)
		);
		expect(street.moves(2)).toEqual(['arrival']);
		expect(street.voids(2)).toMatchObject([{ type: 'arrival', why: 'echo of neighbour {node:1}' }]);
		expect(street.voids(2)[0]!.atMs).toBe(street.entries(2).at(-1)!.atMs);
		expect(street.view(1).state).toBe('occupied');
		expect(street.view(2).state).toBe('vacant');
	});

	test('an arrival says what the neighbours did', () => {
		const street = two();
		street.play(drives(1, READY, QUIET, TAKEN), beats(2, READY, READY + MIN, QUIET, 10 * S));
		expect(street.entries(1).at(-1)!.evidence.because).toContain('neighbour {node:2} quiet');
	});
});

test('an echo from before the bay’s own departure is no part of the baseline that followed', () => {
	const street = new Street(bays(2)).commission();
	const large: Vec3 = [200, 250, -150];
	const echo: Vec3 = [40, 40, -30];
	const own: Vec3 = [-90, 60, 110];
	const withEcho = plus(QUIET, echo);
	const t = (min: number) => READY + min * MIN;
	street.play(
		drives(2, READY, QUIET, plus(QUIET, large)),
		drives(1, READY, QUIET, withEcho, withEcho),
		beats(2, t(1), t(30), plus(QUIET, large)),
		beats(1, t(1), t(10), withEcho),
		drives(1, t(10), withEcho, plus(withEcho, own)),
		beats(1, t(11), t(20), plus(withEcho, own)),
		// The neighbour had moved up meanwhile: its echo is gone when this vehicle leaves.
		drives(1, t(20), plus(withEcho, own), QUIET),
		beats(1, t(21), t(30), QUIET)
	);
	expect(street.moves(1)).toEqual(['arrival', 'departure']);
	street.play(
		drives(2, t(30), plus(QUIET, large), QUIET),
		...[1, 2].map((id) => beats(id, t(31), t(40), QUIET))
	);
	expect(street.view(1).disturbanceMg!).toBeLessThan(5);
	expect(street.view(1).doubt).toBeNull();
});
