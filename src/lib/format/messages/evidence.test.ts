import { afterEach, expect, test } from 'vitest';
import { disturbanceWords, stepWords } from '$lib/detection/evidence';
import type { Step } from '$lib/detection/state';
import { de } from './de';
import { en } from './en';
import { evidenceWords } from './evidence';
import { speakFrom } from './index';

afterEach(() => {
	speakFrom(() => en);
});
const step = (gapS: number, riseS: number) => ({ j: [30, 40, 0], gapS, riseS }) as unknown as Step;

test('evidence that detection writes is read in German with the same figures', () => {
	// A step of (30, 40, 0) mG is 50 mG long.
	speakFrom(() => de);
	expect(evidenceWords(disturbanceWords(61.6, 35.2))).toBe('Störung 62 mG, Schwelle 35 mG');
	expect(evidenceWords(stepWords(step(0, 4), 'rose'))).toBe('stieg um 50 mG in 4 s');
	expect(evidenceWords(stepWords(step(600, 0), 'fell'))).toBe(
		'fiel um 50 mG in einer Lücke von 10 min'
	);
	expect(
		evidenceWords(`${stepWords(step(0, 4), 'moved')}: no magnet, for the field came back by itself`)
	).toBe('wanderte um 50 mG in 4 s: kein Magnet, denn das Feld kam von selbst zurück');
	expect(evidenceWords('neighbour bay B07 quiet')).toBe('Nachbar B07 ruhig');
});
test('what has no rule stays as it was said, and English is left alone', () => {
	speakFrom(() => de);
	expect(evidenceWords('a sentence of another version')).toBe('a sentence of another version');
	speakFrom(() => en);
	expect(evidenceWords('neighbour bay B07 quiet')).toBe('neighbour bay B07 quiet');
});
