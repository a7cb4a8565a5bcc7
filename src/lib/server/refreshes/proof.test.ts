import { expect, test } from 'vitest';
import { REFRESH_PARAMS as P } from './params';
import { prove, verdictOf, type ProofInput, type ProofRow } from './proof';
import { stillRows } from './still';

/** Alternates by ±`noiseMg`: successive differences of 2 noise, whose robust sigma over √2 is 0 or known by hand. */
const rows = (n: number, mg: number, wobble: readonly number[] = [0]): ProofRow[] =>
	Array.from({ length: n }, (_, i) => ({
		atMs: i * 2_000,
		rawMg: [mg + (wobble[i % wobble.length] ?? 0), 50, 400],
		polarity: 1,
		tempC: 25
	}));

// A bridge of offset 10 in field [100, 40, 390]: SET reads B + O, RESET reads -B + O (method 2).
const input = (more: Partial<ProofInput> = {}): ProofInput => ({
	pulseAtMs: 0,
	setMg: [110, 50, 400],
	resetMg: [-90, -30, -380],
	before: { polarity: 1, rawMg: [102, 46.8, 368.8] },
	afterMg: [110, 50, 400],
	pulseTempC: 25,
	offsetTaken: true,
	offsetRefusal: null,
	rowsBefore: rows(60, 110),
	rowsAfter: rows(60, 110),
	offsetBeforeMg: [9, 10, 10],
	reference: { fieldMg: [100, 40, 390], offsetMg: [9, 10, 10], tempC: 25, sigmaMg: 0.5 },
	sensitivityTempcoPerC: -0.003,
	unexplainedBeforeMg: 32,
	unexplainedAfterMg: null,
	driftingMg: 10,
	...more
});

test('a film that held 92 % of each axis had lost 8 %, before less after', () => {
	// Before: 0.92 B + O = [102, 46.8, 368.8]; loss = -0.08 B = [-8, -3.2, -31.2], length 32.4 mG by hand.
	const proof = prove(input(), P);
	expect(proof.filmLossMg?.map((v) => Number(v.toFixed(6)))).toEqual([-8, -3.2, -31.2]);
	expect(proof.filmLossPercent).toBeCloseTo(8, 6);
	expect(proof.filmLossTotalMg).toBeCloseTo(Math.hypot(8, 3.2, 31.2), 6);
	expect(proof.offsetAfterMg).toEqual([10, 10, 10]);
	expect(proof.unexplainedAfterMg).toBeCloseTo(0, 9);
	expect(verdictOf(proof, P)).toEqual({
		cured: true,
		visit: false,
		words: 'proved: the film had lost 32.4 mG (8.0 %)'
	});
});

test('a flipped film is called flipped, not 200 %', () => {
	// r = -B + O before the pulse, though the node held it for SET.
	const proof = prove(input({ before: { polarity: 1, rawMg: [-90, -30, -380] } }), P);
	expect(proof.filmLossPercent).toBeCloseTo(200, 6);
	expect(verdictOf(proof, P).words).toContain('the film was flipped');
});

test('without the reading before the pulse the loss is not known, and it is proved all the same', () => {
	const proof = prove(input({ before: null }), P);
	expect(proof.filmLossMg).toBeNull();
	expect(verdictOf(proof, P)).toMatchObject({ cured: true, visit: false });
});

test.each<[string, Partial<ProofInput>, string]>([
	['unexplained drift at the limit', { rowsAfter: rows(60, 120) }, 'unexplained drift 10.0 mG'],
	["drift's own figure over the limit", { unexplainedAfterMg: 12 }, 'unexplained drift 12.0 mG'],
	['a reading after that does not repeat SET', { afterMg: [115, 50, 400] }, '5.0 mG from the SET'],
	['no reading after', { afterMg: null }, 'no reading after the last pulse'],
	[
		'an offset that detection refused',
		{ offsetTaken: false, offsetRefusal: 'the field moved around it' },
		'the field moved around it'
	],
	['noise that doubled', { rowsAfter: rows(60, 110, [0, 2, -2, 3]) }, 'noise'],
	['59 readings', { rowsAfter: rows(59, 110) }, '59 still readings']
])('not cured: %s', (_, more, says) => {
	const verdict = verdictOf(prove(input(more), P), P);
	expect(verdict.cured).toBe(false);
	expect(verdict.words).toContain(says);
});

test('gain off by 3 % at reference temperature: film cured, and somebody is sent', () => {
	const weak: Partial<ProofInput> = {
		// B = 0.96 × reference.
		setMg: [106, 48.4, 384.4],
		resetMg: [-86, -28.4, -364.4],
		afterMg: [106, 48.4, 384.4],
		rowsAfter: rows(60, 106).map((row) => ({ ...row, rawMg: [106, 48.4, 384.4] }))
	};
	expect(verdictOf(prove(input(weak), P), P)).toMatchObject({
		cured: true,
		visit: true,
		words: expect.stringContaining('film cured, gain or surroundings changed (4.0 %') as string
	});
	// The same at 38.3 °C is κ alone: -0.3 %/°C × 13.3 °C = -4 %.
	const warm = verdictOf(prove(input({ ...weak, pulseTempC: 38.33 }), P), P);
	expect(warm.visit).toBe(false);
});

test('a reference learned before the first pair is held against without its offset', () => {
	const reference = { fieldMg: [110, 50, 400], offsetMg: null, tempC: 25, sigmaMg: 0.5 } as const;
	expect(prove(input({ reference }), P).gainRatio).toBeCloseTo(1, 9);
});

test('a row that jumps, and the two after it, are not still', () => {
	const list = rows(10, 110).map((row, i) =>
		i === 5 ? { ...row, rawMg: [150, 50, 400] as const } : row
	);
	expect(stillRows(list, 0.5).map(({ atMs }) => atMs / 2_000)).toEqual([2, 3, 4, 8, 9]);
});
