import { afterEach, expect, test } from 'vitest';
import { PARAMS } from '$lib/detection/params';
import { DRIFT_PARAMS } from '$lib/drift/params';
import { speakFrom } from '$lib/format/messages';
import { de } from '$lib/format/messages/de';
import { en } from '$lib/format/messages/en';
import { parameterReason } from '$lib/format/messages/parameters';
import { parameterGroups, parameterLabel, parameterValue } from './parameter-words';

afterEach(() => {
	speakFrom(() => en);
});
const ALL = [...Object.keys(PARAMS), ...Object.keys(DRIFT_PARAMS)];

test('detection and drift share no name: one list of settings can hold both', () => {
	expect(new Set(ALL).size).toBe(ALL.length);
});

test('every setting stands in one group, with words of its own', () => {
	const shown = parameterGroups().flatMap(({ names }) => names);
	expect([...shown].sort()).toEqual([...ALL].sort());
	for (const name of ALL) expect(parameterLabel(name)).not.toBe(name);
});

test('a value is written with its unit, a ratio without', () => {
	expect(parameterValue(35, 'mG')).toBe('35 mG');
	expect(parameterValue(0.1 + 0.2, '1')).toBe('0.3');
	expect(parameterValue(15, '°')).toBe('15°');
});

test('in German every setting has its label and reason, and figures their comma', () => {
	speakFrom(() => de);
	for (const [name, { reason }] of [...Object.entries(PARAMS), ...Object.entries(DRIFT_PARAMS)]) {
		expect(parameterReason({ name, reason }), name).not.toBe(reason);
		expect(parameterLabel(name)).not.toBe(name);
	}
	expect(parameterValue(0.7, '1')).toBe('0,7');
	expect(parameterValue(30, 'readings')).toBe('30 Messungen');
});
