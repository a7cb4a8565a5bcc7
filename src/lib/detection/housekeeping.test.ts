import { describe, expect, test } from 'vitest';
import type { Vec3 } from '$lib/magnetics/vector';
import {
	beats,
	drives,
	HOUR,
	memberOf,
	MIN,
	plus,
	QUIET,
	READY,
	Street,
	times
} from './rows.fixture';
import { addStay, longStayAfterMs, longStayPercentileMs } from './stays';

const CAR: Vec3 = [60, 90, -80];
const TAKEN = plus(QUIET, CAR);

/** A vehicle at READY, heard every 10 min until `h` hours later; the field after half of it as told. */
function stay(h: number, later: Vec3 = TAKEN): Street {
	const street = new Street([memberOf(1, { periodS: 600 })]).commission();
	street.play(
		drives(1, READY, QUIET, TAKEN),
		beats(1, READY + 10 * MIN, READY + HOUR, TAKEN, 10 * MIN),
		beats(
			1,
			READY + HOUR,
			READY + h * HOUR,
			(t) => between(TAKEN, later, (t - READY) / (40 * HOUR)),
			10 * MIN
		)
	);
	return street;
}
const between = (a: Vec3, b: Vec3, share: number): Vec3 =>
	plus(times(a, 1 - Math.min(1, share)), times(b, Math.min(1, share)));
const flag = (street: Street) => street.group.nodes[0]!.slow.longStay;

describe('long stay', () => {
	test('under 48 h nothing is asked', () => {
		expect(stay(47).asks()).not.toContain('reading: long stay');
	});

	test('after 48 h the server asks the node once, and a vehicle that stands as it came is listed without doubt', () => {
		const street = stay(50);
		expect(street.asks().filter((a) => a === 'reading: long stay')).toHaveLength(1);
		expect(flag(street)).toBe(true);
		expect(street.view()).toMatchObject({ state: 'occupied', doubt: null });
	});

	test('a disturbance that has lost over 20 % of its size makes the bay doubtful', () => {
		const street = stay(50, plus(QUIET, times(CAR, 0.7)));
		expect(flag(street)).toBe(false);
		expect(street.view().doubt?.reason).toContain('long stay');
		expect(street.view().state).toBe('occupied');
	});

	test('a disturbance that has turned by over 15° makes the bay doubtful', () => {
		// (60, 90, -80) turned to (95, 60, -75): cosine 0.958…, 16.7°, nearly the same size.
		const turned: Vec3 = [95, 60, -75];
		const street = stay(50, plus(QUIET, turned));
		expect(street.view().doubt?.reason).toContain('long stay');
	});

	test('10 % smaller and a few degrees turned is still the same vehicle', () => {
		const street = stay(50, plus(QUIET, [56, 78, -74]));
		expect(flag(street)).toBe(true);
		expect(street.view().doubt).toBeNull();
	});

	test('a departure takes the bay off the list', () => {
		const street = stay(50);
		const t = READY + 50 * HOUR;
		street.play(drives(1, t, TAKEN, QUIET), beats(1, t + MIN, t + 5 * MIN, QUIET));
		expect(flag(street)).toBe(false);
		expect(street.view().state).toBe('vacant');
	});
});

describe('usual length of stays', () => {
	const nodeWith = (hours: readonly number[]) => {
		const n = new Street().group.nodes[0]!;
		for (const h of hours) {
			n.slow.arrival = {
				step: CAR as [number, number, number],
				first: CAR as [number, number, number],
				atMs: READY
			};
			addStay(n, READY + h * HOUR);
		}
		return n;
	};

	test('fewer than 20 stays say nothing', () => {
		expect(longStayPercentileMs(nodeWith(Array<number>(19).fill(100)))).toBe(0);
	});

	test('a bay of short stays is looked at after 48 h', () => {
		expect(longStayAfterMs(nodeWith(Array<number>(50).fill(1)))).toBe(48 * HOUR);
	});

	test('a bay of stays of 60 h is looked at after 1.5 times their 99th percentile', () => {
		const afterH = longStayAfterMs(nodeWith(Array<number>(50).fill(60))) / HOUR;
		// Half-octaves: the percentile is told up to a factor of 1.41 too high.
		expect(afterH).toBeGreaterThanOrEqual(1.5 * 60);
		expect(afterH).toBeLessThanOrEqual(1.5 * 60 * 1.42);
	});

	test('no stay goes unchecked for more than 14 days', () => {
		expect(longStayAfterMs(nodeWith(Array<number>(50).fill(400)))).toBe(336 * HOUR);
	});
});
