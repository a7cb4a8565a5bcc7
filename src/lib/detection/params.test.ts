import fc from 'fast-check';
import { expect, test } from 'vitest';
import { PARAM_NAMES, PARAMS, refuseParams, resolveParams } from './params';

/** method.md sections 2 to 4. */
const BY_METHOD = {
	onMg: 35,
	onSigma: 12,
	offRatio: 0.7,
	releaseRatio: 0.35,
	stepRatio: 0.5,
	stillS: 3,
	stillMg: 4,
	gapMinS: 90,
	gapPeriods: 2.5,
	baselineTauS: 1800,
	undoRatio: 0.4,
	neighbourM: 4,
	echoRatio: 0.55,
	echoUndoRatio: 0.5,
	queueS: 20,
	queueFactor: 2.5,
	queueOnRatio: 2,
	queueMaxS: 600,
	invertedAxisMg: 50,
	invertedRatio: 0.1,
	rescaleAxisMg: 50,
	pulseQuietS: 2,
	learnReadings: 30,
	learnS: 120,
	learnSigmaMg: 3,
	returnMg: 10,
	returnsToProve: 3,
	longStayH: 48,
	longStayFactor: 1.5,
	longStayMaxH: 336,
	longSizeRatio: 0.2,
	longAngleDeg: 15,
	settleUndoH: 24
} as const;

test.each(Object.entries(BY_METHOD))('%s stands at %d as the method says', (name, value) => {
	expect(PARAMS[name as keyof typeof BY_METHOD].defaultValue).toBe(value);
});

test.each(PARAM_NAMES)('%s: the default lies in its range and carries unit and reason', (name) => {
	const { defaultValue, min, max, unit, reason } = PARAMS[name];
	expect(defaultValue).toBeGreaterThanOrEqual(min);
	expect(defaultValue).toBeLessThanOrEqual(max);
	expect(min).toBeLessThan(max);
	expect(unit).not.toBe('');
	expect(reason.length).toBeGreaterThan(10);
});

test.each(PARAM_NAMES)('%s: its limits are taken, what lies beyond is refused', (name) => {
	const { min, max } = PARAMS[name];
	expect(refuseParams({ [name]: min })).toEqual([]);
	expect(refuseParams({ [name]: max })).toEqual([]);
	expect(refuseParams({ [name]: min - 1e-6 })).toEqual([{ name, why: 'out_of_range' }]);
	expect(refuseParams({ [name]: max + 1e-6 })).toEqual([{ name, why: 'out_of_range' }]);
});

test('a name that is no setting is refused, also one that every object has', () => {
	expect(refuseParams({ magic: 1, toString: 2 })).toEqual([
		{ name: 'magic', why: 'not_a_setting' },
		{ name: 'toString', why: 'not_a_setting' }
	]);
});

test('a value that is no number is refused', () => {
	expect(refuseParams({ onMg: NaN })).toEqual([{ name: 'onMg', why: 'out_of_range' }]);
});

test('whatever overrides are stored, every resolved setting lies in its range', () => {
	fc.assert(
		fc.property(
			fc.dictionary(fc.constantFrom(...PARAM_NAMES, 'magic'), fc.double()),
			(overrides) => {
				const resolved = resolveParams(overrides);
				expect(Object.keys(resolved)).toEqual(PARAM_NAMES);
				for (const name of PARAM_NAMES) {
					expect(resolved[name]).toBeGreaterThanOrEqual(PARAMS[name].min);
					expect(resolved[name]).toBeLessThanOrEqual(PARAMS[name].max);
				}
			}
		)
	);
});
