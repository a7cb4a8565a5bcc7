import { expect, test } from 'vitest';
import type { Vec3 } from '$lib/magnetics/vector';
import { beats, drives, MIN, plus, READY, Street } from './rows.fixture';

/** Horizontal part along (3, 4) / 5: ĥ = (0.6, 0.8, 0), ê = ẑ × ĥ = (-0.8, 0.6, 0). */
const FIELD: Vec3 = [90, 120, 400];
const CAR: Vec3 = [60, 90, -80];
const line = (street: Street, atMs: number, gMg: Vec3) =>
	street.give({ kind: 'site_line', nodeId: 1, atMs, gMg });

function taken(): Street {
	const street = new Street([...new Street().group.nodes.map((n) => n.member)], 0);
	street.commission('person', FIELD);
	street.play(
		drives(1, READY, FIELD, plus(FIELD, CAR)),
		beats(1, READY + MIN, READY + 3 * MIN, plus(FIELD, CAR))
	);
	return street;
}

test('an occupied baseline follows the site’s change through the node’s own frame', () => {
	const street = taken();
	line(street, READY + 4 * MIN, [10, 5, -3]);
	// 10 ĥ + 5 ê - 3 ẑ = (6 - 4, 8 + 3, -3)
	const b = street.view().baselineMg!;
	expect(b[0] - FIELD[0]).toBeCloseTo(2, 1);
	expect(b[1] - FIELD[1]).toBeCloseTo(11, 1);
	expect(b[2] - FIELD[2]).toBeCloseTo(-3, 1);
});

test('only the change since it was last told is followed', () => {
	const street = taken();
	line(street, READY + 4 * MIN, [10, 5, -3]);
	const b = street.view().baselineMg;
	line(street, READY + 5 * MIN, [10, 5, -3]);
	expect(street.view().baselineMg).toEqual(b);
});

test('a vacant baseline sees the change by itself and is not moved twice', () => {
	const street = new Street().commission('person', FIELD);
	const b = street.view().baselineMg;
	line(street, READY, [10, 5, -3]);
	expect(street.view().baselineMg).toEqual(b);
});

test('a storm of 40 mG under a vehicle does not hide its departure', () => {
	const street = taken();
	const storm: Vec3 = [24, 32, 0];
	line(street, READY + 4 * MIN, [20, 0, 0]);
	line(street, READY + 5 * MIN, [40, 0, 0]);
	const loud = plus(plus(FIELD, CAR), storm);
	street.play(beats(1, READY + 5 * MIN, READY + 8 * MIN, loud));
	street.play(drives(1, READY + 8 * MIN, loud, plus(FIELD, storm)));
	expect(street.moves()).toEqual(['arrival', 'departure']);
	expect(street.view().disturbanceMg).toBeLessThan(4);
});
