import { describe, expect, test } from 'vitest';
import { demoPlan } from './demo-site';
import { bayPolygon, corners, layRow, toLonLat } from './site-plan';

const area2 = (ring: readonly (readonly [number, number])[]): number =>
	ring.reduce((sum, [x, y], i) => {
		const [nx, ny] = ring[(i + 1) % ring.length]!;
		return sum + x * ny - nx * y;
	}, 0);

describe('a row of bays', () => {
	const spec = { zone: 'z', row: 'r', prefix: 'B', first: 1, count: 4, eastM: 0, northM: 0 };

	test('stands side by side at the bays’ width, the lane before their tails', () => {
		const { bays, lane } = layRow({ ...spec, alongDeg: 90, noseDeg: 0 });
		expect(bays.map(({ code }) => code)).toEqual(['B01', 'B02', 'B03', 'B04']);
		expect(bays[1]!.eastM - bays[0]!.eastM).toBeCloseTo(2.5, 9);
		// Noses point north, so the lane lies south of the row.
		expect(lane.northM).toBeLessThan(-5);
	});

	test('of slanted bays is wider by the sine of the angle', () => {
		const { bays } = layRow({ ...spec, alongDeg: 90, noseDeg: 30 });
		// 2.5 / sin 60°.
		expect(bays[1]!.eastM - bays[0]!.eastM).toBeCloseTo(2.886751, 5);
	});

	test('along a kerb lies end to end with the lane on its left', () => {
		const { bays, lane } = layRow({ ...spec, alongDeg: 0, noseDeg: 0 });
		expect(bays[1]!.northM - bays[0]!.northM).toBeGreaterThan(5);
		expect(lane.eastM).toBeLessThan(-2);
	});
});

describe('the demo site', () => {
	const plan = demoPlan(1);

	test('has forty bays in three zones, a node each, all codes and serials once', () => {
		expect(plan.bays).toHaveLength(40);
		expect(new Set(plan.bays.map(({ zone }) => zone)).size).toBe(3);
		expect(new Set(plan.bays.map(({ code }) => code)).size).toBe(40);
		expect(new Set(plan.nodes.map(({ serial }) => serial)).size).toBe(40);
		for (const { serial } of plan.nodes) expect(serial).toMatch(/^[A-Z0-9-]{4,32}$/);
	});

	test('draws each bay as a closed ring, counter-clockwise, 2.2 to 2.5 by 5 to 5.5 m (RFC 7946)', () => {
		for (const bay of plan.bays) {
			const ring = bayPolygon(plan, bay).coordinates[0]!;
			expect(ring).toHaveLength(5);
			expect(ring[4]).toEqual(ring[0]);
			expect(area2(ring.slice(0, 4))).toBeGreaterThan(0);
			expect(area2(corners(bay)) / 2).toBeCloseTo(bay.widthM * bay.lengthM, 9);
		}
	});

	test('lets no bay lie on another', () => {
		for (const a of plan.bays) {
			for (const b of plan.bays) {
				const apartM = Math.hypot(a.eastM - b.eastM, a.northM - b.northM);
				if (a !== b) expect(apartM).toBeGreaterThan(2.4);
			}
		}
	});
});

test('a kilometre north is 0.00898 degrees of latitude in middle latitudes', () => {
	const plan = { ...demoPlan(1), latDeg: 45, lonDeg: 0 };
	// One degree of latitude at 45° is 111.132 km [M].
	expect(toLonLat(plan, 0, 1000)[1] - 45).toBeCloseTo(1 / 111.132, 6);
});
