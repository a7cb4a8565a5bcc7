import { expect, test } from 'vitest';
import { centreOf } from './bay-centre';

const ring = (points: [number, number][]) =>
	JSON.stringify({ type: 'Polygon', coordinates: [[...points, points[0]]] });

test('the centre of a bay, metres from the origin', () => {
	// By hand: one ten-thousandth of a degree of latitude is 11.132 m, of longitude at 60 north half of it.
	const square = ring([
		[10, 60],
		[10.0002, 60],
		[10.0002, 60.0002],
		[10, 60.0002]
	]);
	const centre = centreOf(square, 60, 10);
	expect(centre?.northM).toBeCloseTo(11.132, 2);
	expect(centre?.eastM).toBeCloseTo(5.566, 2);
});

test('what is no polygon has no centre', () => {
	for (const text of [
		'',
		'null',
		'{}',
		'{"coordinates":[]}',
		'{"coordinates":[[[1,2],[3,4]]]}',
		'[1'
	])
		expect(centreOf(text, 0, 0)).toBeNull();
	expect(centreOf('{"coordinates":[[[0,0],[1,"x"],[1,1],[0,0]]]}', 0, 0)).toBeNull();
});
