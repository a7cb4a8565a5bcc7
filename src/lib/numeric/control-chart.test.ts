import { describe, expect, test } from 'vitest';
import {
	CUSUM_START,
	cusumChart,
	cusumSignals,
	cusumStep,
	ewmaChart,
	ewmaStep
} from './control-chart';
import { normalCdf, normalDensity } from './normal';
import { gaussian, seeded } from './random';

describe('EWMA', () => {
	// Source: NIST/SEMATECH e-Handbook 6.3.2.4 (check-values.md 2a).
	const DATA = [
		52.0, 47.0, 53.0, 49.3, 50.1, 47.0, 51.0, 50.1, 51.2, 50.5, 49.6, 47.6, 49.9, 51.3, 47.8, 51.2,
		52.6, 52.4, 53.6, 52.1
	];
	const AVERAGES = [
		50.6, 49.52, 50.564, 50.1848, 50.1594, 49.2116, 49.7481, 49.8537, 50.2576, 50.3303, 50.1112,
		49.3578, 49.5205, 50.0543, 49.378, 49.9246, 50.7272, 51.2291, 51.9403, 51.9882
	];
	const chart = ewmaChart(DATA, { target: 50, sigma: 2.0539, lambda: 0.3, limitSigmas: 3 });

	test('the averages of the handbook', () => {
		for (const [i, value] of AVERAGES.entries()) expect(chart.averages[i]).toBeCloseTo(value, 4);
	});

	test('its limits, within its own rounding', () => {
		expect(Math.abs(chart.upper - 52.5884)).toBeLessThan(1e-4);
		expect(Math.abs(chart.lower - 47.4115)).toBeLessThan(1e-4);
		expect(chart.upper).toBeCloseTo(52.588432, 6);
	});

	test('step by step is the same', () => {
		let average = 50;
		for (const value of DATA) average = ewmaStep(average, value, 0.3);
		expect(average).toBe(chart.averages.at(-1));
	});
});

describe('tabular CUSUM', () => {
	// Source: NIST/SEMATECH e-Handbook 6.3.2.3, exact columns (check-values.md 2b).
	const ROWS: [number, number, number][] = [
		[324.925, 0, 0],
		[324.675, 0, 0.0075],
		[324.725, 0, 0],
		[324.35, 0, 0.3325],
		[325.35, 0.0325, 0],
		[325.225, 0, 0],
		[324.125, 0, 0.5575],
		[324.525, 0, 0.715],
		[325.225, 0, 0.1725],
		[324.6, 0, 0.255],
		[324.625, 0, 0.3125],
		[325.15, 0, 0],
		[328.325, 3.0075, 0],
		[327.25, 4.94, 0],
		[327.825, 7.4475, 0],
		[328.5, 10.63, 0],
		[326.675, 11.9875, 0],
		[327.775, 14.445, 0],
		[326.875, 16.0025, 0],
		[328.35, 19.035, 0]
	];
	const H = 4.1959;
	const states = cusumChart(
		ROWS.map(([x]) => x),
		{ target: 325, k: 0.3175, h: H }
	);

	test.each(ROWS.map((row, i) => [i, ...row] as const))('row %i', (i, _x, high, low) => {
		expect(states[i]!.high).toBeCloseTo(high, 9);
		expect(states[i]!.low).toBeCloseTo(low, 9);
	});

	test('the first signal is at i = 14', () => {
		expect(states.findIndex((state) => cusumSignals(state, H))).toBe(13);
	});
});

/**
 * Exact average run length of a one-sided CUSUM from 0: L(z) = 1 + L(0) Φ(k - z - shift) +
 * ∫ L(x) φ(x + k - z - shift) dx over 0 … h, by Gauss–Legendre nodes and elimination. The two-sided one
 * follows from 1/ARL = 1/ARL+ + 1/ARL-.
 */
function oneSidedArl(h: number, k: number, shift: number, nodes = 48): number {
	const { x, w } = gaussLegendre(nodes, h);
	const z = [0, ...x];
	const rows = z.map((from, i) => {
		const row = z.map((to, j) => {
			const weight =
				j === 0 ? normalCdf(k - from - shift) : w[j - 1]! * normalDensity(to + k - from - shift);
			return (i === j ? 1 : 0) - weight;
		});
		return [...row, 1];
	});
	return solve(rows)[0]!;
}

function gaussLegendre(n: number, h: number): { x: number[]; w: number[] } {
	const x: number[] = [];
	const w: number[] = [];
	for (let i = 1; i <= n; i++) {
		let root = Math.cos((Math.PI * (i - 0.25)) / (n + 0.5));
		let slope = 0;
		for (let step = 0; step < 50; step++) {
			let [before, value] = [1, root];
			for (let m = 2; m <= n; m++)
				[before, value] = [value, ((2 * m - 1) * root * value - (m - 1) * before) / m];
			slope = (n * (root * value - before)) / (root * root - 1);
			root -= value / slope;
		}
		x.push((h / 2) * (1 + root));
		w.push(h / ((1 - root * root) * slope * slope));
	}
	return { x, w };
}

function solve(rows: number[][]): number[] {
	const n = rows.length;
	for (let c = 0; c < n; c++) {
		const pivot = rows[c]!;
		for (const [r, row] of rows.entries()) {
			if (r === c) continue;
			const factor = row[c]! / pivot[c]!;
			for (let j = c; j <= n; j++) row[j]! -= factor * pivot[j]!;
		}
	}
	return rows.map((row, i) => row[n]! / row[i]!);
}

describe('average run lengths, k = 0.5 (check-values.md 2c, exact columns)', () => {
	// shift, h=4 one-sided, h=5 one-sided
	test.each([
		[0, 335.3676, 930.887],
		[0.25, 77.0785, 141.6877],
		[0.5, 26.6792, 38.0096],
		[1, 8.3832, 10.376],
		[2, 3.3428, 4.0089],
		[4, 1.7085, 2.0126]
	])('one-sided, shift %f: %f and %f', (shift, h4, h5) => {
		expect(oneSidedArl(4, 0.5, shift)).toBeCloseTo(h4, 4);
		expect(oneSidedArl(5, 0.5, shift)).toBeCloseTo(h5, 4);
	});

	// Source: Brook and Evans 1972, h = 3 (check-values.md 2c): exact 117.5957 and 3.7491.
	test('one-sided, h = 3', () => {
		expect(oneSidedArl(3, 0.5, 0)).toBeCloseTo(117.5957, 3);
		expect(oneSidedArl(3, 0.5, 1.5)).toBeCloseTo(3.7491, 3);
	});

	// Source: Lucas and Crosier 1982, Table 1, two-sided.
	test.each([
		[0, 168, 465],
		[0.5, 26.6, 38.0],
		[1, 8.38, 10.4]
	])('two-sided by formula, shift %f: %f and %f as published', (shift, h4, h5) => {
		const two = (h: number) =>
			1 / (1 / oneSidedArl(h, 0.5, shift) + 1 / oneSidedArl(h, 0.5, -shift));
		expect(Math.abs(two(4) / h4 - 1)).toBeLessThan(0.005);
		expect(Math.abs(two(5) / h5 - 1)).toBeLessThan(0.005);
	});

	// 10,000 runs: a standard error of 1 %; bound 4 of them.
	test.each([
		[4, 0, 167.6838],
		[4, 1, 8.3831],
		[5, 0.5, 37.9961]
	])('by simulation of our own chart, h %i, shift %f: %f', (h, shift, exact) => {
		const random = seeded(h * 1000 + shift * 10);
		let total = 0;
		const runs = 10_000;
		for (let run = 0; run < runs; run++) {
			let state = CUSUM_START;
			do {
				state = cusumStep(state, shift + gaussian(random), { target: 0, k: 0.5 });
				total++;
			} while (!cusumSignals(state, h));
		}
		expect(Math.abs(total / runs / exact - 1)).toBeLessThan(0.04);
	});
});
