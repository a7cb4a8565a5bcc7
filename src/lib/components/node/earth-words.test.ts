import { expect, test } from 'vitest';
import type { EarthCheck } from '$lib/schemas/desk-parameters';
import { earthText } from './earth-words';

const check = (wanted: Partial<EarthCheck>): EarthCheck => ({
	...{ learnedAt: '2026-03-01T00:00:00.000Z', accepted: false, quietMg: 480, earthMg: 480 },
	...{ horizontalMg: 200, inclinationDeg: 64, ratio: 1, verdict: 'agrees', withinModelYears: true },
	...wanted
});

test('35 % off is a warning that names the share, and what to look at', () => {
	const said = earthText(check({ quietMg: 288, ratio: 0.6, verdict: 'off' }));
	expect(said.head).toContain('40 % off, more than 35 %');
	expect(said.advice).toContain('Buried steel');
});

test('a ratio near 4 or 1/4 says that the wrong resolution was chosen', () => {
	expect(earthText(check({ ratio: 4.1, verdict: 'wrong_resolution' })).head).toContain(
		'ratio near 4: wrong resolution'
	);
	expect(earthText(check({ ratio: 0.26, verdict: 'wrong_resolution' })).head).toContain(
		'ratio near 1/4: wrong resolution'
	);
});

test('without a pair or without a reference nothing is claimed', () => {
	const none = { quietMg: null, ratio: null } as const;
	expect(earthText(check({ ...none, verdict: 'no_offset' })).head).toMatch(/^Off: no pair/);
	expect(earthText(check({ ...none, verdict: 'not_learned' })).head).toMatch(/^No quiet field/);
});
