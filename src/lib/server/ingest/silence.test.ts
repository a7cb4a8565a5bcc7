import { expect, test } from 'vitest';
import { heardMs } from '$lib/server/store/queries/hearing';
import { judgeSilence } from './silence';

const MIN = 60_000;

/** Method 4, silent: 3 periods, 5 min at the least; unknown after the site's grace time. */
test('silent after three periods, five minutes at the least', () => {
	expect(judgeSilence(5 * MIN, 60, 900)).toEqual({ silent: false, lost: false });
	expect(judgeSilence(5 * MIN + 1, 60, 900)).toEqual({ silent: true, lost: false });
	expect(judgeSilence(59 * MIN, 1_200, 900)).toEqual({ silent: false, lost: false });
	expect(judgeSilence(61 * MIN, 1_200, 900)).toEqual({ silent: true, lost: true });
});

test('lost after the grace time, to the ms', () => {
	expect(judgeSilence(15 * MIN, 60, 900).lost).toBe(false);
	expect(judgeSilence(15 * MIN + 1, 60, 900).lost).toBe(true);
});

test('a grace time shorter than three periods does not make a node lost before it is silent', () => {
	expect(judgeSilence(4 * MIN, 60, 60)).toEqual({ silent: false, lost: false });
});

test('only time inside the stretches counts', () => {
	const stretches = [
		{ fromMs: 0, toMs: 100 },
		{ fromMs: 200, toMs: 300 },
		{ fromMs: 400, toMs: 500 }
	];
	expect(heardMs(stretches, 50, 450)).toBe(50 + 100 + 50);
	expect(heardMs(stretches, 110, 190)).toBe(0);
	expect(heardMs(stretches, 450, 1_000)).toBe(50);
	expect(heardMs([], 0, 1_000)).toBe(0);
});
