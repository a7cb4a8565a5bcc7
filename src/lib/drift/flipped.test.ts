import { expect, test } from 'vitest';
import { unflipped } from './flipped';
import type { DriftReference, HourRecord } from './types';

const reference: DriftReference = {
	...{ atMs: 0, fieldMg: [-110, -197, 517], offsetMg: [5, -3, 8], tempC: 15 }
};
const hour = (fieldMg: HourRecord['fieldMg'], stay: string | null = null): HourRecord => ({
	...{ hourMs: 3_600_000, fieldMg, offsetMg: [5, -3, 8], tempC: 15, n: 60, stay }
});

/* Signs changed by hand (method 4): all axes, then one. */
test('a film that has flipped whole is read with its signs: 1.3 mG of drift stay, no thousand', () => {
	expect(unflipped(hour([109, 196, -516.5]), reference).fieldMg).toEqual([-109, -196, 516.5]);
});
test('an axis is a bridge of its own', () => {
	expect(unflipped(hour([-110, 196, 517]), reference).fieldMg).toEqual([-110, -196, 517]);
});
test('a drift of 40 mG, steel of 200 mG and a stay are left as they are', () => {
	for (const one of [hour([-110, -197, 557]), hour([-110, 3, 517]), hour([110, 197, -517], 's1')])
		expect(unflipped(one, reference)).toBe(one);
});
test('an axis of under 50 mG tells no sign, and without an offset there is no direction', () => {
	const small: DriftReference = { ...reference, fieldMg: [40, 200, 450] };
	const one = hour([-40, 200, 450]);
	expect(unflipped(one, small)).toBe(one);
	const none = hour([110, 197, -517]);
	expect(unflipped(none, { ...reference, offsetMg: null })).toBe(none);
});
