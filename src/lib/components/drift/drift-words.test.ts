import { afterEach, expect, test } from 'vitest';
import { CAUSE_WORDS, NOTE_WORDS, REFRESH_WORDS, VISIT_WORDS } from '$lib/drift/words';
import { speakFrom } from '$lib/format/messages';
import { de } from '$lib/format/messages/de';
import { driftSays } from '$lib/format/messages/drift';
import { en } from '$lib/format/messages/en';
import { causeText, daysText, rateText } from './drift-words';

afterEach(() => {
	speakFrom(() => en);
});

test('days to a limit are a range; one that may never come says so', () => {
	expect(daysText(null)).toBeNull();
	expect(daysText({ limitMg: 10, from: 12.2, to: 30.4 })).toBe('12 to 30 days');
	expect(daysText({ limitMg: 10, from: 0.3, to: 2 })).toBe('under 1 to 2 days');
	expect(daysText({ limitMg: 10, from: 9, to: null })).toBe('9 days or never');
	expect(daysText({ limitMg: 10, from: 6.8, to: 7.2 })).toBe('about 7 days');
	expect(daysText({ limitMg: 10, from: 0.1, to: 0.6 })).toBe('under 1 day');
});

test('a rate that chance explains is no rate', () => {
	expect(rateText({ ratePerDayMg: 0.8, trend: true })).toBe('0.8 mG a day');
	expect(rateText({ ratePerDayMg: 0.8, trend: false })).toBe('no trend');
	expect(rateText({ ratePerDayMg: null, trend: false })).toBe('under 5 days known');
});

test('a node that cannot be judged says why', () => {
	const hour = '2026-03-01T00:00:00.000Z';
	const note = { note: 'no_pair', says: 'no pair yet: direction not known' } as const;
	expect(causeText({ hour, cause: null, notes: [note] })).toBe('No pair yet: direction not known');
	expect(causeText({ hour: null, cause: null, notes: [] })).toBe('No hour judged yet');
});

test('in German every cause, note, reason and next step of the server is said in German', () => {
	speakFrom(() => de);
	const causes = Object.values(CAUSE_WORDS).flatMap(({ says, next }) => [says, next]);
	const others = [NOTE_WORDS, REFRESH_WORDS, VISIT_WORDS].flatMap((table) => Object.values(table));
	for (const said of [...causes, ...others]) expect(driftSays(said)).not.toBe(said);
	expect(driftSays('wait: no pair yet: direction not known')).toBe(
		'warten: noch kein Paar: Richtung nicht bekannt'
	);
	expect(daysText({ limitMg: 10, from: 12.2, to: 30.4 })).toBe('12 bis 30 Tage');
});
