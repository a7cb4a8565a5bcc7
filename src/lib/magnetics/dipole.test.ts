import { expect, test } from 'vitest';
import { dipoleFieldMg } from './dipole';
import { magnitude, scale, type Vec3 } from './vector';

// Source: check-values.md 6, numbers [C] from the published dipole formula.
test.each<[Vec3, Vec3, Vec3]>([
	[
		[30, -20, 100],
		[0.8, 0.4, 0.6],
		[101.845392, 78.937079, 14.352196]
	],
	[
		[100, 0, 0],
		[1, 1, 0],
		[17.67767, 53.033009, 0]
	],
	[
		[0, 0, 100],
		[0, 0, -1],
		[0, 0, 200]
	],
	[
		[0, 0, 1],
		[0, 0, 1],
		[0, 0, 2]
	],
	[
		[0, 0, 1],
		[1, 0, 0],
		[0, 0, -1]
	]
])('m = %j A·m² at %j m gives %j mG', (moment, at, fieldMg) => {
	const found = dipoleFieldMg(moment, at);
	for (const [i, mg] of fieldMg.entries()) expect(found[i]).toBeCloseTo(mg, 6);
});

test('the first of them is 129.651579 mG long', () => {
	expect(magnitude(dipoleFieldMg([30, -20, 100], [0.8, 0.4, 0.6]))).toBeCloseTo(129.651579, 6);
});

// Source: check-values.md 6, table of axial and equatorial fields [C].
test.each([
	[50, 0.5, 800, 400],
	[100, 1.5, 59.26, 29.63],
	[200, 2.5, 25.6, 12.8],
	[300, 5, 4.8, 2.4],
	[1000, 1, 2000, 1000]
])('%i A·m² at %f m: %f mG axial, %f mG equatorial', (m, r, axialMg, equatorialMg) => {
	expect(magnitude(dipoleFieldMg([0, 0, m], [0, 0, r]))).toBeCloseTo(axialMg, 1);
	expect(magnitude(dipoleFieldMg([0, 0, m], [r, 0, 0]))).toBeCloseTo(equatorialMg, 1);
});

test('twice the distance is an eighth of the field, and the far side sees the same', () => {
	const m: Vec3 = [30, -20, 100];
	const r: Vec3 = [0.8, 0.4, 0.6];
	const near = magnitude(dipoleFieldMg(m, r));
	expect(near / magnitude(dipoleFieldMg(m, scale(r, 2)))).toBeCloseTo(8, 12);
	expect(dipoleFieldMg(m, scale(r, -1))).toEqual(dipoleFieldMg(m, r));
});
