import { expect, test } from 'vitest';
import { flagBox } from './flags';
import { layOut } from './layout';
import { fit } from './view';
import { placeZoneNames } from './zone-names';

/** Four bays of 2.5 m by 5 m in a row on the equator, where a degree is 111.32 km either way. */
const ring = (at: number): [number, number][] => {
	const [x, y] = [(at * 2.5) / 111_320, 5 / 110_574];
	const wide = 2.5 / 111_320;
	return [
		[x, 0],
		[x + wide, 0],
		[x + wide, y],
		[x, y],
		[x, 0]
	];
};
const layout = layOut(
	[0, 1, 2, 3].map((at) => ({ code: `A${at}`, zone: 'north', ring: ring(at) }))
);
const view = fit(layout.box, { width: 500, height: 300 });
const zoneNames = new Map([['north', 'North gate']]);

test('a zone is lettered over its upper left corner', () => {
	const [name] = placeZoneNames({ layout, view, zoneNames, flags: [] });
	expect(name?.text).toBe('North gate');
});
test('the name is lifted off a datum triangle in its place, and only then', () => {
	const plain = placeZoneNames({ layout, view, zoneNames, flags: [] })[0]!;
	const near = { bay: 0, initials: null };
	const lifted = placeZoneNames({ layout, view, zoneNames, flags: [near] })[0]!;
	const box = flagBox({ layout, view }, near)!;
	expect(lifted.y + lifted.sizePx / 2).toBeLessThanOrEqual(box.top);
	const far = placeZoneNames({ layout, view, zoneNames, flags: [{ bay: 3, initials: null }] })[0]!;
	expect(far.y).toBe(plain.y);
});
