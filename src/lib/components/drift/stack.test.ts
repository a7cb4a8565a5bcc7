import { expect, test } from 'vitest';
import { stackOf } from './stack';

type Hours = Parameters<typeof stackOf>[0];
const zero: [number, number, number] = [0, 0, 0];
const hour = (
	h: number,
	vectors: Partial<NonNullable<Hours[number]['vectors']>>
): Hours[number] => ({
	at: new Date(h * 3_600_000).toISOString(),
	vectors: {
		...{ totalMg: zero, temperatureMg: zero, geomagneticMg: zero, bridgeMg: zero },
		...{ filmMg: zero, surroundingsMg: zero, unexplainedMg: zero, ...vectors }
	}
});

test('parts are stacked along the largest total and add up to it', () => {
	// Total (3, 4, 0), length 5. Along (0.6, 0.8, 0): temperature (5, 5, 0) is 7, unexplained (-2, -1, 0) is -2.
	const stack = stackOf([
		hour(0, { totalMg: [3, 4, 0], temperatureMg: [5, 5, 0], unexplainedMg: [-2, -1, 0] })
	])!;
	const of = (label: string) => stack.parts.find((part) => part.label === label)!;
	expect(of('temperature').above[0]).toBeCloseTo(7, 9);
	expect(of('unexplained').below[0]).toBeCloseTo(-2, 9);
	expect(stack.totalMg[0]).toBeCloseTo(5, 9);
});

test('hours that were not judged are a gap, not a straight line', () => {
	const at = { totalMg: [1, 0, 0] as [number, number, number] };
	const stack = stackOf([hour(0, at), { ...hour(1, {}), vectors: null }, hour(4, at)])!;
	expect(stack.timesS).toEqual([0, 3600, 4 * 3600]);
	expect(stack.totalMg[1]).toBeNull();
});

test('without a judged hour there is nothing to stack', () => {
	expect(stackOf([{ ...hour(0, {}), vectors: null }])).toBeNull();
});
