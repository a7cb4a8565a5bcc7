import fc from 'fast-check';
import { describe, expect, test } from 'vitest';
import { dot, magnitude, subtract, ZERO, type Vec3 } from '$lib/magnetics/vector';
import { frameOf, intoFrame, outOfFrame } from './frame';
import { kIndex, K_LOWER_LIMITS_MG } from './k-scale';
import { driftSettings } from './params';
import { siteLine, type LineVote } from './site-line';

const SETTINGS = driftSettings();
const votes = (...residuals: Vec3[]): LineVote[] =>
	residuals.map((residualMg) => ({ residualMg, ownMg: ZERO }));
const storm: Vec3 = [-15, 2, 1];
const near = (v: Vec3, by: number): Vec3 => [v[0] + by, v[1] - by, v[2] + by / 2];

describe('the heading-free frame', () => {
	const mg = fc.integer({ min: -500, max: 500 });

	test('into it and out again is the same vector, of the same length', () => {
		fc.assert(
			fc.property(fc.tuple(mg, mg, mg), fc.tuple(mg, mg, mg), (quiet, v) => {
				const frame = frameOf(quiet);
				fc.pre(frame !== null);
				expect(magnitude(subtract(outOfFrame(frame, intoFrame(frame, v)), v))).toBeLessThan(1e-9);
				expect(Math.abs(dot(frame.h, frame.e))).toBeLessThan(1e-12);
			})
		);
	});

	test('nodes of any heading see one storm alike', () => {
		for (const heading of [0, 0.7, 2, 4]) {
			const [c, s] = [Math.cos(heading), Math.sin(heading)];
			const turn = ([n, e, z]: Vec3): Vec3 => [n * c + e * s, -n * s + e * c, z];
			const seen = intoFrame(frameOf(turn([200, 0, 400]))!, turn(storm));
			expect(magnitude(subtract(seen, storm))).toBeLessThan(1e-9);
		}
	});

	test('a field that stands upright has no horizontal direction', () => {
		expect(frameOf([3, -4, 450])).toBeNull();
	});
});

describe('the site line', () => {
	test('under 5 nodes it is zero and says so', () => {
		const line = siteLine(votes(storm, storm, storm, storm), SETTINGS);
		expect(line).toMatchObject({ verdict: 'few_nodes', changeMg: ZERO, nodes: 4 });
	});

	test('it is the component-wise median, whatever one node with new steel says', () => {
		const line = siteLine(
			votes(storm, near(storm, 0.5), near(storm, -0.5), storm, [60, -40, 9]),
			SETTINGS
		);
		expect(line.verdict).toBe('known');
		expect(line.changeMg).toEqual([-15, 2, 1]);
	});

	test('over 25 mG it is no storm', () => {
		const line = siteLine(votes(...Array<Vec3>(6).fill([-26, 0, 0])), SETTINGS);
		expect(line).toMatchObject({ verdict: 'cause_not_known', changeMg: ZERO });
	});

	test('nodes that disagree have no common cause', () => {
		const line = siteLine(
			votes([9, 0, 0], [-8, 1, 3], [0, 7, -6], [4, -9, 0], [-3, 5, 8]),
			SETTINGS
		);
		expect(line).toMatchObject({ verdict: 'cause_not_known', changeMg: ZERO });
		expect(line.spreadMg!).toBeGreaterThan(2);
	});

	test('nodes that have wandered apart over months still tell a storm', () => {
		const own: Vec3[] = [
			[6, 0, 0],
			[-6, 2, 1],
			[0, 8, 3],
			[3, -7, -4],
			[-5, 4, 6]
		];
		const line = siteLine(
			own.map((ownMg) => ({ residualMg: [ownMg[0] - 15, ownMg[1] + 2, ownMg[2] + 1], ownMg })),
			SETTINGS
		);
		expect(line).toMatchObject({ verdict: 'known', changeMg: storm });
	});
});

// Source: Lockwood et al. 2019, Table 1, K = 9 at 500 nT (check-values.md 8a), in mG.
describe('the K scale', () => {
	test('its lower limits', () => {
		const expected = [0, 0.05, 0.1, 0.2, 0.4, 0.7, 1.2, 2, 3.3, 5];
		for (const [k, mg] of expected.entries()) expect(K_LOWER_LIMITS_MG[k]).toBeCloseTo(mg, 9);
	});

	test.each([
		[0, 0],
		[0.049, 0],
		[0.05, 1],
		[0.39, 3],
		[0.4, 4],
		[3.3, 8],
		[4.99, 8],
		[5, 9],
		[20, 9]
	])('a range of %f mG is K %i', (mg, k) => {
		expect(kIndex(mg)).toBe(k);
	});
});
