import { expect, test } from 'vitest';
import { normalPolygon } from './polygon';

/** RFC 7946, 3.1.6 (check-values 9d): first = last, exterior counter-clockwise. */
const COUNTER_CLOCKWISE = [
	[0, 0],
	[1, 0],
	[1, 1],
	[0, 1],
	[0, 0]
];

test('a counter-clockwise ring stays as it is', () => {
	const p = { type: 'Polygon' as const, coordinates: [COUNTER_CLOCKWISE] };
	expect(normalPolygon(p)).toEqual(p);
});

test('a clockwise ring is turned, not refused', () => {
	const p = { type: 'Polygon' as const, coordinates: [[...COUNTER_CLOCKWISE].reverse()] };
	expect(normalPolygon(p).coordinates[0]).toEqual(COUNTER_CLOCKWISE);
});

test('heights are left out and degrees kept to seven decimals', () => {
	const ring = [
		[0.123456789, 0, 5],
		[1, 0, 5],
		[1, 1, 5],
		[0.123456789, 0, 5]
	];
	expect(normalPolygon({ type: 'Polygon', coordinates: [ring] }).coordinates[0]).toEqual([
		[0.1234568, 0],
		[1, 0],
		[1, 1],
		[0.1234568, 0]
	]);
});
