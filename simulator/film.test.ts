import { describe, expect, test } from 'vitest';
import { ageFilm, bridgeMg, freshFilm, healFilm, strikeFilm, toCounts, type Sensor } from './film';

const SENSOR: Sensor = {
	countsPerGauss: 16_384,
	limit: 131_072,
	noiseMg: 0,
	offsetMg: [75.3173828125, 0, 0],
	offsetPerC: [0, 0, 0],
	kappaPerC: -0.003,
	referenceC: 25
};

describe('SET and RESET', () => {
	test('500 mG with an offset of 75.317 mG gives the counts of check-values 5b', () => {
		const film = freshFilm(0);
		const set = toCounts(SENSOR, bridgeMg(SENSOR, film, [500, 0, 0], 25, 0));
		healFilm(film, -1);
		const reset = toCounts(SENSOR, bridgeMg(SENSOR, film, [500, 0, 0], 25, 0));
		// 140498 and 124114 offset-binary, less 131072.
		// The vector is (S, R) with (S - R)/2 = 8192 counts and (S + R)/2 = 1234 counts.
		expect(set).toBe(140_498 - 131_072);
		expect(reset).toBe(1234 - 8192);
	});

	test('a pulse restores gain and direction and leaves the offset alone (method 2)', () => {
		const film = freshFilm(0);
		strikeFilm(film, { kind: 'flip', atMs: 0, axes: [0, 1, 2] });
		strikeFilm(film, { kind: 'offset', atMs: 0, toMs: 0, byMg: [20, 0, 0] });
		expect(film.gain).toEqual([-1, -1, -1]);
		healFilm(film, 1);
		expect(film.gain).toEqual([1, 1, 1]);
		expect(film.offsetExtraMg).toEqual([20, 0, 0]);
	});
});

test('sensitivity of -0.3 %/°C over 40 °C moves 450 mG by 54 mG (check-values 5d)', () => {
	const film = freshFilm(0);
	const at = (tempC: number) => bridgeMg(SENSOR, film, [450, 0, 0], tempC, 0);
	expect(at(25) - at(65)).toBeCloseTo(54, 9);
});

test('a film that loses to 70 % in a week has 85 % half way, and keeps 70 % afterwards', () => {
	const week = 7 * 86_400_000;
	const film = freshFilm(0);
	strikeFilm(film, { kind: 'loss', atMs: 0, toMs: week, remaining: [0.7, 1, 1] });
	ageFilm(film, week / 2);
	expect(film.gain[0]).toBeCloseTo(0.85, 9);
	ageFilm(film, 2 * week);
	expect(film.gain[0]).toBeCloseTo(0.7, 9);
	expect(film.gain[1]).toBe(1);
});

test('an offset that creeps arrives where it should and stays there', () => {
	const film = freshFilm(0);
	strikeFilm(film, { kind: 'offset', atMs: 0, toMs: 1000, byMg: [0, 0, -30] });
	ageFilm(film, 500);
	expect(film.offsetExtraMg[2]).toBeCloseTo(-15, 9);
	ageFilm(film, 5000);
	expect(film.offsetExtraMg[2]).toBeCloseTo(-30, 9);
});

test('counts stop at the ends of the range', () => {
	expect(toCounts(SENSOR, 20_000)).toBe(131_071);
	expect(toCounts(SENSOR, -20_000)).toBe(-131_072);
	expect(toCounts(SENSOR, 500)).toBe(8192);
});
