import { describe, expect, test } from 'vitest';
import type { Vec3 } from '$lib/magnetics/vector';
import { fromReferenceMg, referenceNow } from './reference';
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
	times,
	type Reading
} from './rows.fixture';

const K: Vec3 = [0.4, -0.3, 0.6];
const CAR: Vec3 = [60, 90, -80];

/** 20 °C and 10 °C either side over a day. */
const tempAt = (atMs: number): number =>
	20 + 10 * Math.sin((2 * Math.PI * (atMs - READY)) / (24 * HOUR));
const fieldAt = (atMs: number, extra: Vec3 = [0, 0, 0]): Vec3 =>
	plus(plus(QUIET, times(K, tempAt(atMs) - 20)), extra);

function days(
	fromMs: number,
	toMs: number,
	extra: (atMs: number) => Vec3 = () => [0, 0, 0]
): Reading[] {
	return beats(1, fromMs, toMs, (t) => fieldAt(t, extra(t)), 5 * MIN).map((r) => ({
		...r,
		tempC: tempAt(r.atMs)
	}));
}

function street(extra?: (atMs: number) => Vec3, days_ = 2): Street {
	const s = new Street([memberOf(1, { periodS: 300 })]);
	s.tempC = 20;
	s.commission();
	s.play(days(READY, READY + days_ * 24 * HOUR, extra));
	return s;
}
const nodeOf = (s: Street) => s.group.nodes[0]!;

describe('temperature slope', () => {
	test('it is found within 0.1 mG/°C an axis after two days', () => {
		const { slope } = nodeOf(street()).slow;
		expect(slope).not.toBeNull();
		for (const i of [0, 1, 2] as const) expect(Math.abs(slope!.k[i] - K[i])).toBeLessThan(0.1);
	});

	test('a drift linear over the days does not enter it', () => {
		const drift = (t: number): Vec3 => [0, 0, (8 * (t - READY)) / (24 * HOUR)];
		const { slope } = nodeOf(street(drift)).slow;
		for (const i of [0, 1, 2] as const) expect(Math.abs(slope!.k[i] - K[i])).toBeLessThan(0.1);
	});

	test('without 2 °C of movement there is none: never a guess', () => {
		const s = new Street([memberOf(1, { periodS: 300 })]);
		s.tempC = 20;
		s.commission();
		s.play(beats(1, READY, READY + 48 * HOUR, QUIET, 5 * MIN));
		expect(nodeOf(s).slow.slope).toBeNull();
	});

	test('without any temperature there is none', () => {
		const s = new Street([memberOf(1, { periodS: 300 })]).commission();
		s.play(beats(1, READY, READY + 48 * HOUR, (t) => fieldAt(t), 5 * MIN));
		expect(nodeOf(s).slow.slope).toBeNull();
	});

	test('an occupied baseline follows it, so that a day’s warming does not hide the departure', () => {
		const s = street();
		const t = READY + 48 * HOUR;
		const at = (atMs: number): Vec3 => plus(fieldAt(atMs), CAR);
		const warm = (list: Reading[]) => list.map((r) => ({ ...r, tempC: tempAt(r.atMs) }));
		s.play(
			warm(drives(1, t, fieldAt(t), at(t))),
			warm(beats(1, t + 5 * MIN, t + 6 * HOUR, at, 5 * MIN))
		);
		const b = s.view().baselineMg!;
		const home = fieldAt(t + 6 * HOUR);
		for (const i of [0, 1, 2] as const) expect(Math.abs(b[i] - home[i])).toBeLessThan(3);
		s.play(warm(drives(1, t + 6 * HOUR, at(t + 6 * HOUR), home)));
		expect(s.moves()).toEqual(['arrival', 'departure']);
	});
});

describe('reference at its temperature', () => {
	test('it moves along the known slope', () => {
		const s = street();
		const n = nodeOf(s);
		n.fast.tempC = Math.fround(30);
		const now = referenceNow(n)!;
		for (const i of [0, 1, 2] as const)
			expect(Math.abs(now[i] - (QUIET[i] + 10 * K[i]))).toBeLessThan(1.5);
	});

	test('without a slope it says nothing 6 °C away from its own temperature', () => {
		const s = new Street();
		s.tempC = 20;
		const n = nodeOf(s.commission());
		expect(fromReferenceMg(n, QUIET)).toBeLessThan(2);
		n.fast.tempC = 26;
		expect(fromReferenceMg(n, QUIET)).toBe(Infinity);
	});
});
