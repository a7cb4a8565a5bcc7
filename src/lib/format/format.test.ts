import { expect, test } from 'vitest';
import { ago, duration } from './duration';
import { celsius, milligauss, millivolt } from './field';
import { clockTime, exact, instantOf, localInput, moment, zoneName } from './time';
import { confidenceWord, conditionSentence, count, stateWord } from './words';

// 2026-03-03T06:55:31Z; Europe/Berlin is UTC+1 in winter and UTC+2 from 29 March 2026 (EU rule: last Sunday).
const WINTER_MS = Date.UTC(2026, 2, 3, 6, 55, 31);
const SUMMER_MS = Date.UTC(2026, 6, 3, 6, 55, 31);
const BERLIN = 'Europe/Berlin';

test('durations are as people say them', () => {
	expect([38_000, 12 * 60_000, 77 * 60_000, 76 * 3_600_000, 3_600_000].map(duration)).toEqual([
		'38 s',
		'12 min',
		'1 h 17 min',
		'3 d 4 h',
		'1 h'
	]);
	expect(duration(-5)).toBe('0 s');
	expect([ago(null, 0), ago(0, 1999), ago(0, 38_000)]).toEqual(['never', 'just now', '38 s ago']);
});
test('times are local to the site, with the zone', () => {
	expect(clockTime(WINTER_MS, BERLIN)).toBe('07:55');
	expect(clockTime(SUMMER_MS, BERLIN)).toBe('08:55');
	expect(exact(WINTER_MS, BERLIN)).toBe('3 Mar 2026 07:55:31 CET (UTC+1)');
	expect(zoneName(WINTER_MS, 'America/Sao_Paulo')).toBe('UTC-3');
	expect(zoneName(WINTER_MS, 'UTC')).toBe('UTC');
	expect(moment(WINTER_MS, BERLIN, WINTER_MS + 60_000)).toBe('07:55');
	expect(moment(WINTER_MS, BERLIN, WINTER_MS + 86_400_000)).toBe('3 Mar 07:55');
});
test('a wall time becomes the instant it means in the zone, on both sides of a clock change', () => {
	expect(localInput(WINTER_MS, BERLIN)).toBe('2026-03-03T07:55');
	expect(instantOf('2026-03-03T07:55', BERLIN)).toBe(Date.UTC(2026, 2, 3, 6, 55));
	expect(instantOf('2026-03-29T01:30', BERLIN)).toBe(Date.UTC(2026, 2, 29, 0, 30));
	expect(instantOf('2026-03-29T03:30', BERLIN)).toBe(Date.UTC(2026, 2, 29, 1, 30));
	expect(instantOf('not a time', BERLIN)).toBeNull();
});
test('a quantity has its unit; 0 is a reading and null is not', () => {
	expect([milligauss(0), milligauss(412.3), milligauss(-8.44), milligauss(null)]).toEqual([
		'0.0 mG',
		'412 mG',
		'−8.4 mG',
		'not measured'
	]);
	expect([celsius(-3.25), millivolt(3612)]).toEqual(['−3.3 °C', '3612 mV']);
});
test("people read the product's words", () => {
	expect([stateWord('occupied'), stateWord('vacant'), stateWord('unknown')]).toEqual([
		'taken',
		'free',
		'not known'
	]);
	expect(conditionSentence('silent', '07:55')).toBe('not heard since 07:55');
	expect(conditionSentence('refresh_due')).toBe('the film needs a pulse');
	expect([0.95, 0.7, 0.4, null].map(confidenceWord)).toEqual([
		'sure',
		'fairly sure',
		'unsure',
		null
	]);
	expect([count(1, 'bay'), count(0, 'bay')]).toEqual(['1 bay', '0 bays']);
});
