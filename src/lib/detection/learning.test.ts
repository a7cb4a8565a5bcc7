import { expect, test } from 'vitest';
import { beats, drives, MIN, plus, QUIET, READY, S, Street, T0, memberOf } from './rows.fixture';
import type { Vec3 } from '$lib/magnetics/vector';

const CAR: Vec3 = [60, 90, -80];
const learned = (street: Street) =>
	street.told.flatMap((o) => (o.kind === 'learned' ? [o.reference] : []));
const placed = (preCommissioned = false, noiseMg = 0.4): Street => {
	const street = new Street([memberOf(1)], noiseMg);
	street.act(T0, { kind: 'place', preCommissioned });
	return street;
};

test('a node that was never placed is learning and its bay unknown', () => {
	const street = new Street();
	street.play(beats(1, T0, T0 + 10 * MIN, QUIET, 2 * S));
	expect(street.view()).toMatchObject({ state: 'unknown', conditions: ['learning'] });
	expect(street.view().confidence).toBeNull();
});

test('placing asks for fast reports and for a pair, learning ends with the former habit', () => {
	const street = placed();
	expect(street.asks()).toEqual(['report_fast: learning', 'pair: learning']);
	street.play(beats(1, T0 + 2 * S, T0 + 3 * MIN, QUIET, 2 * S));
	expect(street.asks().at(-1)).toBe('report_habit: learned');
});

test('29 readings over any time are too few to learn from', () => {
	const street = placed();
	street.play(beats(1, T0, T0 + 29 * 5 * S, QUIET, 5 * S));
	expect(learned(street)).toEqual([]);
	// The very first reading only says where the field stands.
	street.play(beats(1, T0 + 29 * 5 * S, T0 + 31 * 5 * S, QUIET, 5 * S));
	expect(learned(street)[0]?.readings).toBe(30);
});

test('30 readings within less than 2 min are too few', () => {
	const street = placed();
	street.play(beats(1, T0, T0 + 118 * S, QUIET, 2 * S));
	expect(learned(street)).toEqual([]);
});

test('a burst does not fill the learning window within seconds', () => {
	const street = placed();
	street.play(
		beats(1, T0, T0 + 30 * S, QUIET, 0.25 * S),
		beats(1, T0 + 121 * S, T0 + 122 * S, QUIET)
	);
	expect(learned(street)).toEqual([]);
});

test('a field noisier than 3 mG an axis is never learned', () => {
	const street = placed(false, 4.5);
	street.play(beats(1, T0, T0 + 30 * MIN, QUIET, 2 * S));
	expect(learned(street)).toEqual([]);
});

test('the reference is the median: seven readings of a passer-by do not move it', () => {
	const street = placed(false, 0);
	street.play(
		beats(1, T0, T0 + 60 * S, QUIET, 2 * S),
		beats(1, T0 + 60 * S, T0 + 74 * S, plus(QUIET, CAR), 2 * S),
		beats(1, T0 + 74 * S, T0 + 3 * MIN, QUIET, 2 * S)
	);
	expect(learned(street)[0]?.fieldMg).toEqual(QUIET);
});

test('a vehicle that has just driven up is not learned over', () => {
	const street = placed();
	street.play(
		beats(1, T0, T0 + 110 * S, QUIET, 2 * S),
		beats(1, T0 + 110 * S, T0 + 124 * S, plus(QUIET, CAR), 2 * S)
	);
	expect(learned(street)).toEqual([]);
});

test('the reference keeps temperature, offset in use and number of readings', () => {
	const street = placed(false, 0);
	street.tempC = 12.5;
	street.play(beats(1, T0, T0 + 3 * MIN, QUIET, 2 * S));
	expect(learned(street)[0]).toMatchObject({ tempC: 12.5, offsetMg: null, sigmaMg: 0 });
	expect(learned(street)[0]?.readings).toBeGreaterThanOrEqual(30);
});

test('a learned field is no reference until somebody accepts it', () => {
	const street = placed();
	street.play(beats(1, T0, T0 + 10 * MIN, QUIET, 2 * S));
	expect(street.view()).toMatchObject({ state: 'unknown', conditions: ['learning'] });
});

test('a person who sees the bay empty accepts: vacant, in service, not provisional', () => {
	const street = new Street().commission();
	const accepted = street.told.find((o) => o.kind === 'accepted');
	expect(accepted).toMatchObject({ provisional: false, by: 'walker' });
	expect(street.view()).toMatchObject({ state: 'vacant', conditions: ['in_service'] });
	expect(street.view().confidence).toBeGreaterThan(0.9);
	expect(street.entries().map((e) => [e.type, e.state])).toEqual([['known', 'vacant']]);
});

test('nobody accepts a bay that was not seen empty', () => {
	const street = placed();
	street.play(beats(1, T0, T0 + 3 * MIN, QUIET, 2 * S));
	street.act(T0 + 4 * MIN, { kind: 'accept', seenEmpty: false, by: 'walker' });
	expect(street.told.at(-1)).toMatchObject({ kind: 'act_done', ok: false });
	expect(street.told.at(-1)).toHaveProperty('why', expect.stringContaining('sees the bay empty'));
});

test('acceptance before anything is learned is refused with a reason', () => {
	const street = placed();
	street.act(T0 + S, { kind: 'accept', seenEmpty: true, by: 'walker' });
	expect(street.told.at(-1)).toMatchObject({ ok: false, why: 'no quiet field learned yet' });
});

test('acceptance is refused when the field has moved since it was learned', () => {
	const street = placed();
	street.play(beats(1, T0, T0 + 3 * MIN, QUIET, 2 * S));
	street.play(beats(1, T0 + 3 * MIN, T0 + 4 * MIN, plus(QUIET, CAR), 2 * S));
	street.act(T0 + 4 * MIN, { kind: 'accept', seenEmpty: true, by: 'walker' });
	expect(street.told.at(-1)).toMatchObject({ ok: false, why: expect.stringContaining('moved') });
});

test('placing anew makes a known bay unknown and learns afresh', () => {
	const street = new Street().commission();
	street.act(READY, { kind: 'place', preCommissioned: false });
	expect(street.view()).toMatchObject({ state: 'unknown', conditions: ['learning'] });
	expect(street.entries().at(-1)).toMatchObject({ type: 'unknown', confidence: null });
});

/** A visit of 10 min: arrival at `atMs`, departure 10 min later, the field back at `home`. */
function visit(street: Street, atMs: number, home: Vec3 = QUIET): void {
	street.play(
		drives(1, atMs, QUIET, plus(QUIET, CAR)),
		beats(1, atMs + MIN, atMs + 10 * MIN, plus(QUIET, CAR)),
		drives(1, atMs + 10 * MIN, plus(QUIET, CAR), home),
		beats(1, atMs + 11 * MIN, atMs + 20 * MIN, home)
	);
}

test('events flow on a reference accepted by rule, with confidence of 0.9 at most', () => {
	const street = new Street().commission('rule');
	visit(street, READY);
	expect(street.told.find((o) => o.kind === 'accepted')).toMatchObject({ provisional: true });
	expect(street.moves()).toEqual(['arrival', 'departure']);
	for (const { confidence } of street.entries()) expect(confidence).toBeLessThanOrEqual(0.9);
	expect(street.entries()[1]?.evidence.against).toContain('the reference is not yet proved');
});

test('three returns within 10 mG lift the cap of a provisional reference', () => {
	const street = new Street().commission('rule');
	for (const k of [0, 1]) visit(street, READY + k * 20 * MIN);
	expect(street.view().confidence).toBeLessThanOrEqual(0.9);
	visit(street, READY + 40 * MIN);
	expect(street.view().confidence).toBeGreaterThan(0.9);
});

const OTHER: Vec3[] = [
	[-150, 40, 200],
	[90, 140, -120],
	[-60, -130, 160]
];

test('returns 15 mG off the reference prove nothing', () => {
	const street = new Street().commission('rule');
	const home = plus(QUIET, [15, 0, 0]);
	visit(street, READY, home);
	for (const [k, other] of OTHER.entries()) {
		const atMs = READY + (k + 1) * 20 * MIN;
		street.play(
			drives(1, atMs, home, plus(home, other)),
			beats(1, atMs + MIN, atMs + 10 * MIN, plus(home, other)),
			drives(1, atMs + 10 * MIN, plus(home, other), home),
			beats(1, atMs + 11 * MIN, atMs + 20 * MIN, home)
		);
	}
	expect(street.moves()).toHaveLength(8);
	expect(street.view().confidence).toBeLessThanOrEqual(0.9);
});

const EMPTY = plus(QUIET, [70, -90, 60]);
/** Learned under a vehicle: it leaves, and others come and go at the field that the reference lacks. */
function learnedUnderVehicle(visits: number): Street {
	const street = new Street().commission('rule');
	street.play(drives(1, READY, QUIET, EMPTY), beats(1, READY + MIN, READY + 20 * MIN, EMPTY));
	for (let k = 1; k <= visits; k++) {
		const atMs = READY + k * 20 * MIN;
		const taken = plus(EMPTY, OTHER[(k - 1) % 3]!);
		street.play(
			drives(1, atMs, EMPTY, taken),
			beats(1, atMs + MIN, atMs + 10 * MIN, taken),
			drives(1, atMs + 10 * MIN, taken, EMPTY),
			beats(1, atMs + 11 * MIN, atMs + 20 * MIN, EMPTY)
		);
	}
	return street;
}

test('the third spell that ends at one field that the reference lacks: the reference may hold a vehicle', () => {
	expect(learnedUnderVehicle(2).view().doubt).toBeNull();
	expect(learnedUnderVehicle(3).view().doubt?.reason).toBe('reference may hold a vehicle');
});

/** One and the same vehicle comes six times to a bay whose returns lie `offMg` from its provisional reference. */
function sameVehicle(offMg: number): Street {
	const street = new Street().commission('rule');
	const home = plus(QUIET, [offMg, 0, 0]);
	const taken = plus(QUIET, OTHER[0]!);
	for (let k = 0; k < 6; k++) {
		const atMs = READY + k * 20 * MIN;
		street.play(
			drives(1, atMs, k === 0 ? QUIET : home, taken),
			beats(1, atMs + MIN, atMs + 10 * MIN, taken),
			drives(1, atMs + 10 * MIN, taken, home),
			beats(1, atMs + 11 * MIN, atMs + 20 * MIN, home)
		);
	}
	return street;
}

test.each([5, 15, 28])(
	'one vehicle that parks alike six times never takes the reference’s place, returns %i mG off it',
	(offMg) => {
		const street = sameVehicle(offMg);
		expect(street.told.filter(({ kind }) => kind === 'accepted')).toHaveLength(1);
		expect(street.voids()).toEqual([]);
		expect(street.view().state).toBe('vacant');
	}
);

test('seen five times between vehicles that differ, that field takes the place of the provisional reference and history is told anew', () => {
	const street = learnedUnderVehicle(4);
	expect(street.view()).toMatchObject({ state: 'vacant', doubt: null });
	expect(street.voids().map(({ type }) => type)).toContain('known');
	const anew = street.entries().slice(-10);
	const visit = [
		['arrival', 'occupied'],
		['departure', 'vacant']
	];
	expect(anew.map(({ type, state }) => [type, state])).toEqual([
		['known', 'occupied'],
		['departure', 'vacant'],
		...[1, 2, 3, 4].flatMap(() => visit)
	]);
	for (const { confidence } of anew) expect(confidence).toBeLessThanOrEqual(0.9);
});

test('with the swap switched off the bay stays doubtful', () => {
	const street = new Street([memberOf(1, { params: { swapVisits: 0 } })]).commission('rule');
	street.play(drives(1, READY, QUIET, EMPTY), beats(1, READY + MIN, READY + 20 * MIN, EMPTY));
	for (let k = 1; k <= 3; k++) {
		const atMs = READY + k * 20 * MIN;
		const taken = plus(EMPTY, OTHER[(k - 1) % 3]!);
		street.play(
			drives(1, atMs, EMPTY, taken),
			beats(1, atMs + MIN, atMs + 10 * MIN, taken),
			drives(1, atMs + 10 * MIN, taken, EMPTY),
			beats(1, atMs + 11 * MIN, atMs + 20 * MIN, EMPTY)
		);
	}
	expect(street.view().doubt?.reason).toBe('reference may hold a vehicle');
});
