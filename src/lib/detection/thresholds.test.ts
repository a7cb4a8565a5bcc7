import { expect, test } from 'vitest';
import type { Vec3 } from '$lib/magnetics/vector';
import { addPass } from './passes';
import { beats, drives, memberOf, MIN, plus, QUIET, READY, S, Street, times } from './rows.fixture';
import { offMg, onMg, releaseMg, sigmaMg, stillMg } from './thresholds';

const nodeOf = (street: Street) => street.group.nodes[0]!;
const upward = (mg: number): Vec3 => [0, 0, mg];

test('a quiet sensor has on = 35 mG and off = 0.7 of it', () => {
	const street = new Street().commission();
	expect(street.view().onMg).toBe(35);
	expect(street.view().offMg).toBeCloseTo(24.5, 9);
});

test('sigma is 1.4826 times the median successive difference over root 2, of the worst axis', () => {
	const street = new Street();
	nodeOf(street).fast.noise[1] = 2;
	// 1.4826 / 1.41421356 × 2 = 2.09671…
	expect(sigmaMg(nodeOf(street))).toBeCloseTo(2.0967, 3);
});

test('the running noise finds a sensor of 1 mG rms within a fifth', () => {
	const street = new Street([memberOf(1)], 1).commission();
	street.play(beats(1, READY, READY + 40 * MIN, QUIET, 2 * S));
	expect(street.view().sigmaMg).toBeGreaterThan(0.8);
	expect(street.view().sigmaMg).toBeLessThan(1.35);
});

test('a sensor of 4 mG noise has on = 12 sigma', () => {
	const n = nodeOf(new Street());
	n.fast.noise[2] = 4;
	// 12 × 1.4826 / √2 × 4 = 50.32
	expect(onMg(n)).toBeCloseTo(50.32, 1);
	expect(offMg(n)).toBeCloseTo(0.7 * 50.32, 1);
});

test('the still box is 4 mG at the least and grows with noise', () => {
	const n = nodeOf(new Street());
	expect(stillMg(n)).toBe(4);
	n.fast.noise[0] = 4;
	expect(stillMg(n)).toBeGreaterThan(16);
});

test('release is 0.35 of the median disturbance of this stay where that is more than off', () => {
	const street = new Street().commission();
	const taken = plus(QUIET, upward(400));
	street.play(drives(1, READY, QUIET, taken), beats(1, READY + MIN, READY + 30 * MIN, taken));
	expect(street.view().offMg).toBeGreaterThan(0.35 * 390);
	expect(street.view().offMg).toBeLessThan(0.35 * 410);
	expect(releaseMg(nodeOf(street))).toBe(street.view().offMg);
});

test('a small vehicle is released at off', () => {
	const street = new Street().commission();
	const taken = plus(QUIET, upward(50));
	street.play(drives(1, READY, QUIET, taken), beats(1, READY + MIN, READY + 10 * MIN, taken));
	expect(street.view()).toMatchObject({ state: 'occupied' });
	expect(street.view().offMg).toBeCloseTo(24.5, 6);
});

test.each([
	[30, []],
	[34, []],
	[37, ['arrival']],
	[60, ['arrival']]
])('a still level %i mG from the baseline makes %j', (mg, moves) => {
	const street = new Street([memberOf(1)], 0.1).commission();
	const taken = plus(QUIET, upward(mg));
	street.play(drives(1, READY, QUIET, taken, taken), beats(1, READY + MIN, READY + 5 * MIN, taken));
	expect(street.moves()).toEqual(moves);
});

test('passes raise the threshold where the factor asks for it: 1.2 times their 98th percentile', () => {
	const n = nodeOf(new Street([memberOf(1, { params: { onPassFactor: 1.2 } })]));
	for (let i = 0; i < 19; i++) {
		n.fast.peakMg = 60;
		addPass(n);
	}
	expect(onMg(n)).toBe(35);
	n.fast.peakMg = 60;
	addPass(n);
	expect(onMg(n)).toBeGreaterThan(1.2 * 50);
	// The running percentile moves by steps of a quarter.
	expect(onMg(n)).toBeLessThanOrEqual(1.2 * 60 * 1.25);
});

test('after 600 passes of 5 to 55 mG the running percentile lies near the 98th', () => {
	const n = nodeOf(new Street());
	for (let i = 0; i < 600; i++) {
		n.fast.peakMg = 5 + ((i * 37) % 100) / 2;
		addPass(n);
	}
	// The 98th of a hundred evenly spread heights from 5 to 54.5 mG is 54 mG.
	expect(n.fast.passMg).toBeGreaterThan(44);
	expect(n.fast.passMg).toBeLessThan(64);
});

test('a movement under 5 mG is no pass', () => {
	const n = nodeOf(new Street());
	n.fast.peakMg = 4.9;
	addPass(n);
	expect(n.fast.passN).toBe(0);
});

test('a higher threshold of a node is in force from the next reading on', () => {
	const street = new Street([memberOf(1, { params: { onMg: 80 } })], 0.1).commission();
	const taken = plus(QUIET, times(upward(1), 70));
	street.play(drives(1, READY, QUIET, taken), beats(1, READY + MIN, READY + 5 * MIN, taken));
	expect(street.moves()).toEqual([]);
});
