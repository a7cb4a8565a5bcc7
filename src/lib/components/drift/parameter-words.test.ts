import { expect, test } from 'vitest';
import { PARAMS } from '$lib/detection/params';
import { DRIFT_PARAMS } from '$lib/drift/params';
import { PARAMETER_GROUPS, parameterLabel, parameterValue } from './parameter-words';

const ALL = [...Object.keys(PARAMS), ...Object.keys(DRIFT_PARAMS)];

test('detection and drift share no name: one list of settings can hold both', () => {
	expect(new Set(ALL).size).toBe(ALL.length);
});

test('every setting stands in one group, with words of its own', () => {
	const shown = PARAMETER_GROUPS.flatMap(({ labels }) => Object.keys(labels));
	expect([...shown].sort()).toEqual([...ALL].sort());
	for (const name of ALL) expect(parameterLabel(name)).not.toBe(name);
});

test('a value is written with its unit, a ratio without', () => {
	expect(parameterValue(35, 'mG')).toBe('35 mG');
	expect(parameterValue(0.1 + 0.2, '1')).toBe('0.3');
	expect(parameterValue(15, '°')).toBe('15°');
});
